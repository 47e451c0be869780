import { StyleSheet, View } from 'react-native';
import Svg, { Circle, Path, Rect } from 'react-native-svg';
import { color } from '../../constants/color.ts';
import { space } from '../../constants/spacing.ts';
import { Text } from './text.tsx';

/** `fine` plain, `due` something to do, `urgent` act now, `stopped` held, `unknown` cannot be told. */
export type StateMark = 'fine' | 'due' | 'urgent' | 'stopped' | 'unknown';

const fills: Record<StateMark, string> = {
  fine: color.ink,
  due: color.due,
  urgent: color.urgent,
  stopped: color.ink,
  unknown: color.inkSoft,
};

function Shape({ mark }: { mark: StateMark }) {
  const fill = fills[mark];
  switch (mark) {
    case 'fine':
      return <Circle cx={7} cy={7} r={3} fill={fill} />;
    case 'due':
      return <Path d="M7 1.5 12.5 12h-11z" fill="none" stroke={fill} strokeWidth={2} />;
    case 'urgent':
      return <Rect x={1} y={1} width={12} height={12} fill={fill} />;
    case 'stopped':
      return <Path d="M1.5 1.5h11v11h-11zM4 7h6" fill="none" stroke={fill} strokeWidth={2} />;
    case 'unknown':
      return <Circle cx={7} cy={7} r={5.5} fill="none" stroke={fill} strokeWidth={1.5} strokeDasharray="2 2" />;
  }
}

/** A state as a shape and a word, never by colour alone. */
export function StateWord({ mark, children, variant = 'note' }: { mark: StateMark; children: string; variant?: 'note' | 'body' }) {
  return (
    <View style={styles.row}>
      <Svg width={14} height={14} viewBox="0 0 14 14" aria-hidden>
        <Shape mark={mark} />
      </Svg>
      <Text variant={variant} bold={mark === 'urgent'}>
        {children}
      </Text>
    </View>
  );
}

const styles = StyleSheet.create({ row: { flexDirection: 'row', alignItems: 'center', gap: space.s } });
