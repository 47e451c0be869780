import Svg, { G, Line, Text } from 'react-native-svg';
import { color } from '../../constants/color.ts';
import { fonts } from '../../constants/fonts.ts';
import type { LaneFrame, LaneModel } from './lane-model.ts';
import { plotOf } from './lane-model.ts';
import { noteSize } from './svg/lane-ground.tsx';

/** The time axis that all lanes share. A label that would be cut off at an edge is pulled in. */
export function TimeAxisRow({ frame, ticks }: { frame: LaneFrame; ticks: LaneModel['timeTicks'] }) {
  const plot = plotOf(frame);
  const inset = 1.4 * frame.remPx;
  return (
    <Svg width={frame.widthPx} height={frame.heightPx} aria-hidden>
      <Line x1={plot.left} x2={plot.right} y1={0.5} y2={0.5} stroke={color.edge} strokeWidth={1} />
      {ticks.map((tick) => {
        const isAtStart = tick.x < plot.left + inset;
        const isAtEnd = tick.x > plot.right - inset;
        return (
          <G key={tick.tMs}>
            <Line x1={tick.x} x2={tick.x} y1={0} y2={tick.strong ? 7 : 4} stroke={color.edge} strokeWidth={tick.strong ? 1.5 : 1} />
            <Text
              x={isAtStart ? tick.x : isAtEnd ? plot.right : tick.x}
              y={frame.remPx * 1.2}
              textAnchor={isAtStart ? 'start' : isAtEnd ? 'end' : 'middle'}
              fill={tick.strong ? color.ink : color.inkSoft}
              fontFamily={fonts.text}
              fontSize={noteSize}
              fontWeight={tick.strong ? '700' : '400'}
            >
              {tick.label}
            </Text>
          </G>
        );
      })}
    </Svg>
  );
}
