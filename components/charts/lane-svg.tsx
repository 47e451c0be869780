import { memo, useId, type ReactNode } from 'react';
import { StyleSheet } from 'react-native';
import Svg, { ClipPath, G, Rect } from 'react-native-svg';
import type { LaneModel } from './lane-model.ts';
import { CrosshairLine } from './svg/crosshair-line.tsx';
import { DoseColumns } from './svg/dose-columns.tsx';
import { GapMarks } from './svg/gap-marks.tsx';
import { LaneGround } from './svg/lane-ground.tsx';
import { TestLines, TestSymbols } from './svg/test-symbols.tsx';
import { TracePaths } from './svg/trace-paths.tsx';

type LaneSize = Pick<LaneModel, 'widthPx' | 'heightPx'>;

/** Every layer of a lane is as large as the lane, and they lie on top of each other. */
function Layer({ size, children }: { size: LaneSize; children: ReactNode }) {
  return (
    <Svg
      width={size.widthPx}
      height={size.heightPx}
      viewBox={`0 0 ${size.widthPx} ${size.heightPx}`}
      style={[styles.layer]}
      pointerEvents="none"
      aria-hidden
    >
      {children}
    </Svg>
  );
}

/** Keeps what is drawn inside the plot. */
function Clipped({ model, children }: { model: LaneModel; children: ReactNode }) {
  const id = `${useId()}plot`;
  const { plot } = model;
  return (
    <>
      <ClipPath id={id}>
        <Rect x={plot.left} y={0} width={plot.right - plot.left} height={model.heightPx} />
      </ClipPath>
      <G clipPath={`url(#${id})`}>{children}</G>
    </>
  );
}

/** Under the traces: rules, band, limits. */
export const LaneUnder = memo(function LaneUnder({ model }: { model: LaneModel }) {
  return (
    <Layer size={model}>
      <LaneGround model={model} />
    </Layer>
  );
});

/** The dense traces as SVG. */
export const LaneTraces = memo(function LaneTraces({ model }: { model: LaneModel }) {
  return (
    <Layer size={model}>
      <Clipped model={model}>
        {model.traces.map((trace) => (
          <TracePaths key={trace.id} trace={trace} />
        ))}
      </Clipped>
    </Layer>
  );
});

/** Over the traces: gaps, doses, tests. */
export const LaneOver = memo(function LaneOver({ model }: { model: LaneModel }) {
  const { plot, doses, tests, traces } = model;
  return (
    <Layer size={model}>
      <Clipped model={model}>
        {doses && <DoseColumns doses={doses} />}
        {tests && <TestLines tests={tests} />}
      </Clipped>
      {traces.slice(0, 1).map((trace) => (
        <GapMarks key={trace.id} gaps={trace.gaps} plot={plot} />
      ))}
      {tests && <TestSymbols tests={tests} left={plot.left} right={plot.right} />}
    </Layer>
  );
});

/** The crosshair has a layer of its own, so that moving it paints one line and not the lane. */
export function LaneCrosshair({ size, x }: { size: LaneSize; x: number }) {
  return (
    <Layer size={size}>
      <CrosshairLine x={x} height={size.heightPx} />
    </Layer>
  );
}

const styles = StyleSheet.create({ layer: { position: 'absolute', left: 0, top: 0 } });
