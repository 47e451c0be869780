import { StyleSheet, View } from 'react-native';
import Svg, { Rect } from 'react-native-svg';
import type { Priority } from '#shared/contract/systems.ts';
import { space } from '../../constants/spacing.ts';
import { priorityBars, priorityWords } from '../../lib/codes/alarm-words.ts';
import { Text } from './text.tsx';

/** The priority of an alarm: one, two or three bars, and the word. Takes the colour around it. */
export function PriorityBars({ priority }: { priority: Priority }) {
  const bars = priorityBars[priority];
  return (
    <View style={styles.row}>
      <Svg width={16} height={14} viewBox="0 0 16 14" aria-hidden>
        {[0, 1, 2].map((index) => (
          <Rect
            key={index}
            x={index * 5.5 + 0.75}
            y={9 - index * 4}
            width={3.5}
            height={4.5 + index * 4}
            fill={index < bars ? 'currentColor' : 'none'}
            stroke="currentColor"
            strokeWidth={1}
          />
        ))}
      </Svg>
      <Text inherit bold>
        {priorityWords[priority]}
      </Text>
    </View>
  );
}

const styles = StyleSheet.create({ row: { flexDirection: 'row', alignItems: 'center', gap: space.s } });
