import { Canvas, DashPathEffect, Group, Points, rect, vec } from '@shopify/react-native-skia';
import { AreaRange, Line } from 'victory-native';
import type { ThemeTokens } from '../../../constants/tokens.ts';
import type { LaneModel } from '../lane-model.ts';
import type { Point, TraceStretch } from '../trace-model.ts';

const asChartPoints = (points: readonly Point[]) => points.map(({ x, y }) => ({ x, y, xValue: x, yValue: y }));

function Stretch({ stretch, dashed, ink }: { stretch: TraceStretch; dashed: boolean; ink: string }) {
  const [only] = stretch.mean;
  if (stretch.mean.length === 1 && only !== undefined) {
    return <Points points={[vec(only.x, only.y)]} mode="points" color={ink} style="stroke" strokeWidth={3} strokeCap="round" />;
  }
  return (
    <>
      {stretch.low.length > 1 && (
        <AreaRange upperPoints={asChartPoints(stretch.high)} lowerPoints={asChartPoints(stretch.low)} color={ink} opacity={0.16} />
      )}
      <Line points={asChartPoints(stretch.mean)} color={ink} strokeWidth={1.5} strokeJoin="round" strokeCap="round">
        {dashed && <DashPathEffect intervals={[5, 4]} />}
      </Line>
    </>
  );
}

/** The dense traces of a lane on one canvas, at the very places that the lane's model gives. */
export default function CanvasTraces({ model, tokens }: { model: LaneModel; tokens: ThemeTokens }) {
  const { plot } = model;
  return (
    <Canvas style={{ position: 'absolute', left: 0, top: 0, width: model.widthPx, height: model.heightPx }} pointerEvents="none">
      <Group clip={rect(plot.left, 0, plot.right - plot.left, model.heightPx)}>
        {model.traces.flatMap((trace) =>
          trace.stretches.map((stretch, i) => (
            <Stretch key={`${trace.id} ${i}`} stretch={stretch} dashed={trace.dashed} ink={tokens.ink} />
          )),
        )}
      </Group>
    </Canvas>
  );
}
