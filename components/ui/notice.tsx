import type { ReactNode } from 'react';
import { StyleSheet, View } from 'react-native';
import { color } from '../../constants/color.ts';
import { space } from '../../constants/spacing.ts';
import { problemFrom, problemSentence } from '../../lib/api-problem.ts';
import { Button } from './button.tsx';
import { Text } from './text.tsx';

export interface NoticeProps {
  /** What happened and what to do, or the error of a request. */
  sentence?: string;
  error?: unknown;
  onRetry?: () => void;
  children?: ReactNode;
}

/** Something did not work, or needs to be known: said in place, with the way on. */
export function Notice({ sentence, error, onRetry, children }: NoticeProps) {
  const said = sentence ?? problemSentence(problemFrom(error));
  return (
    <View role="alert" style={styles.box}>
      <Text>{said}</Text>
      {children}
      {onRetry === undefined ? null : <Button onPress={onRetry}>Try again</Button>}
    </View>
  );
}

const styles = StyleSheet.create({
  box: {
    gap: space.m,
    padding: space.l,
    alignItems: 'flex-start',
    backgroundColor: color.sheet,
    borderWidth: 1,
    borderColor: color.edge,
    borderLeftWidth: 4,
    borderLeftColor: color.ink,
  },
});
