import type { ReactNode } from 'react';
import { StyleSheet, View } from 'react-native';
import { space } from '../../constants/spacing.ts';
import { Text } from './text.tsx';

/** Nothing here yet: why, and what to do first. `children` holds the one action. */
export function EmptyState({ sentence, children }: { sentence: string; children?: ReactNode }) {
  return (
    <View style={styles.box}>
      <Text soft>{sentence}</Text>
      {children}
    </View>
  );
}

const styles = StyleSheet.create({ box: { gap: space.m, paddingVertical: space.l, alignItems: 'flex-start' } });
