import { G, Path, Text } from 'react-native-svg';
import { color } from '../../../constants/color.ts';
import { fonts } from '../../../constants/fonts.ts';
import type { LaneModel } from '../lane-model.ts';
import type { GapMark } from '../trace-model.ts';
import { noteSize } from './lane-ground.tsx';

const leastTickedPx = 4;

/** A gap: nothing between two end ticks, and how long it lasted where that fits. */
export function GapMarks({ gaps, plot }: { gaps: readonly GapMark[]; plot: LaneModel['plot'] }) {
  const middle = (plot.top + plot.bottom) / 2;
  return (
    <G>
      {gaps
        .filter((gap) => gap.x2 - gap.x1 >= leastTickedPx)
        .map((gap) => (
          <G key={gap.x1}>
            <Path d={`M${gap.x1} ${middle - 7}v14M${gap.x2} ${middle - 7}v14`} stroke={color.inkSoft} strokeWidth={1} fill="none" />
            {gap.label !== null && (
              <Text
                x={(gap.x1 + gap.x2) / 2}
                y={middle + 4}
                textAnchor="middle"
                fill={color.inkSoft}
                fontFamily={fonts.text}
                fontSize={noteSize}
              >
                {gap.label}
              </Text>
            )}
          </G>
        ))}
    </G>
  );
}
