import { G, Line, Rect, Text } from 'react-native-svg';
import { color } from '../../../constants/color.ts';
import { fonts } from '../../../constants/fonts.ts';
import type { LaneModel, LimitLine } from '../lane-model.ts';

/** The smallest size of the type scale; it follows the reader's text size. */
export const noteSize = '0.8125rem';

function Band({ band, plot }: { band: NonNullable<LaneModel['band']>; plot: LaneModel['plot'] }) {
  const height = band.bottom - band.top;
  return (
    <G>
      <Rect x={plot.left} y={band.top} width={plot.right - plot.left} height={height} fill={color.brand} fillOpacity={0.1} />
      {[band.top, band.bottom].map((y) => (
        <Line key={y} x1={plot.left} x2={plot.right} y1={y} y2={y} stroke={color.edge} strokeWidth={1} />
      ))}
      <Text x={plot.left + 6} y={band.top - 4} fill={color.inkSoft} fontFamily={fonts.text} fontSize={noteSize}>
        {band.label}
      </Text>
    </G>
  );
}

/** Soft: one long-dashed line in the hue of what is due. Hard: a double line in ink. */
function Limit({ limit, plot }: { limit: LimitLine; plot: LaneModel['plot'] }) {
  const isSoft = limit.kind === 'soft';
  const offsets = isSoft ? [0] : [-1.5, 1.5];
  return (
    <G>
      {offsets.map((offset) => (
        <Line
          key={offset}
          x1={plot.left}
          x2={plot.right}
          y1={limit.y + offset}
          y2={limit.y + offset}
          stroke={isSoft ? color.due : color.ink}
          strokeWidth={isSoft ? 1.5 : 1}
          strokeDasharray={isSoft ? '12 5' : undefined}
        />
      ))}
      <Text x={plot.right - 4} y={limit.y - 4} textAnchor="end" fill={color.inkSoft} fontFamily={fonts.text} fontSize={noteSize}>
        {limit.label}
      </Text>
    </G>
  );
}

/** What lies under the data: rules at the ticks, the band and the limits. */
export function LaneGround({ model }: { model: LaneModel }) {
  const { plot } = model;
  return (
    <G>
      {model.timeTicks.map((tick) => (
        <Line
          key={tick.tMs}
          x1={tick.x}
          x2={tick.x}
          y1={0}
          y2={model.heightPx}
          stroke={color.rule}
          strokeWidth={tick.strong ? 1.5 : 1}
          strokeDasharray={tick.strong ? undefined : '1 3'}
        />
      ))}
      {model.valueTicks.map((tick) => (
        <G key={tick.value}>
          <Line x1={plot.left} x2={plot.right} y1={tick.y} y2={tick.y} stroke={color.rule} strokeWidth={1} />
          <Text x={plot.left - 6} y={tick.y + 4} textAnchor="end" fill={color.inkSoft} fontFamily={fonts.figures} fontSize={noteSize}>
            {tick.label}
          </Text>
        </G>
      ))}
      {model.emptyWords !== null && (
        <Text
          x={(plot.left + plot.right) / 2}
          y={plot.bottom - 8}
          textAnchor="middle"
          fill={color.inkSoft}
          fontFamily={fonts.text}
          fontSize={noteSize}
        >
          {model.emptyWords}
        </Text>
      )}
      {model.band && <Band band={model.band} plot={plot} />}
      {model.limits.map((limit) => (
        <Limit key={limit.label} limit={limit} plot={plot} />
      ))}
    </G>
  );
}
