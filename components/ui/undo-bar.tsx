import { useEffect } from 'react';
import { StyleSheet, View } from 'react-native';
import { color } from '../../constants/color.ts';
import { space } from '../../constants/spacing.ts';
import { Button } from './button.tsx';
import { Text } from './text.tsx';

/** How long an undo is offered, in milliseconds. */
const offerMs = 8000;

/** What was done, and the way back for 8 s. Goes away by `onDone`. */
export function UndoBar({ sentence, onUndo, onDone }: { sentence: string; onUndo: () => void; onDone: () => void }) {
  useEffect(() => {
    const timer = setTimeout(onDone, offerMs);
    return () => clearTimeout(timer);
  }, [onDone]);
  return (
    <View role="status" style={styles.bar}>
      <View style={styles.text}>
        <Text>{sentence}</Text>
      </View>
      <Button onPress={onUndo}>Undo</Button>
    </View>
  );
}

const styles = StyleSheet.create({
  bar: {
    flexDirection: 'row',
    alignItems: 'center',
    gap: space.l,
    paddingVertical: space.s,
    paddingHorizontal: space.l,
    backgroundColor: color.sheet,
    borderTopWidth: 1,
    borderColor: color.edge,
  },
  text: { flex: 1 },
});
