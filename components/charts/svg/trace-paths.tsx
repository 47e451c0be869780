import { area, line } from 'd3-shape';
import { G, Path } from 'react-native-svg';
import { color } from '../../../constants/color.ts';
import type { Point, Trace, TraceStretch } from '../trace-model.ts';

const lineOf = line<Point>(
  (point) => point.x,
  (point) => point.y,
);

function envelopeOf({ low, high }: TraceStretch): string | null {
  const between = area<Point>()
    .x((point) => point.x)
    .y0((_, i) => low[i]?.y ?? 0)
    .y1((point) => point.y);
  return between([...high]);
}

/** A stretch of one point has no line: it is a dot, so that a lonely sample is seen. */
function Stretch({ stretch, dash }: { stretch: TraceStretch; dash: string | undefined }) {
  const [only] = stretch.mean;
  const isLonely = stretch.mean.length === 1 && only !== undefined;
  const envelope = stretch.low.length > 1 ? envelopeOf(stretch) : null;
  const path = isLonely ? `M${only.x - 0.01} ${only.y}h0.02` : lineOf([...stretch.mean]);
  return (
    <G>
      {envelope !== null && <Path d={envelope} fill={color.ink} fillOpacity={0.16} />}
      {path !== null && (
        <Path
          d={path}
          fill="none"
          stroke={color.ink}
          strokeWidth={isLonely ? 3 : 1.5}
          strokeLinejoin="round"
          strokeLinecap="round"
          strokeDasharray={isLonely ? undefined : dash}
        />
      )}
    </G>
  );
}

/** The dense traces in SVG: for the first paint, for print, and where no canvas can be had. */
export function TracePaths({ trace }: { trace: Trace }) {
  return (
    <G>
      {trace.stretches.map((stretch, i) => (
        <Stretch key={i} stretch={stretch} dash={trace.dashed ? '5 4' : undefined} />
      ))}
    </G>
  );
}
