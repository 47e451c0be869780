import { memo, useId, useMemo, useState } from 'react';
import type { ThemeTokens } from '../../constants/tokens.ts';
import { Button } from '../ui/button.tsx';
import { Heading } from '../ui/heading.tsx';
import { DenseTraces } from './dense-traces.tsx';
import type { LaneFrame, LaneInput, LaneModel } from './lane-model.ts';
import { laneModel } from './lane-model.ts';
import { laneSummary } from './lane-summary.ts';
import { LaneCrosshair, LaneOver, LaneUnder } from './lane-svg.tsx';
import { laneTables } from './lane-table.ts';
import { LaneTableView } from './lane-table-view.tsx';
import type { TimeRange } from './time-axis.ts';

export interface ChartLaneProps {
  lane: LaneInput;
  frame: LaneFrame;
  ticks: LaneModel['timeTicks'];
  /** The range after the last gesture ended: words and tables follow that, not each frame of a drag. */
  settledRange: TimeRange;
  crosshairX: number | null;
  tokens: ThemeTokens;
}

/** One lane: its title, its picture with a sentence for who does not see it, and its table twin. */
export const ChartLane = memo(function ChartLane({ lane, frame, ticks, settledRange, crosshairX, tokens }: ChartLaneProps) {
  const [isTableShown, setIsTableShown] = useState(false);
  const tablesId = useId();
  const model = useMemo(() => laneModel(lane, frame, ticks), [lane, frame, ticks]);
  const summary = useMemo(() => laneSummary(lane, settledRange, frame.zone), [lane, settledRange, frame.zone]);
  const tables = useMemo(
    () => (isTableShown ? laneTables(lane, settledRange, frame.zone) : []),
    [isTableShown, lane, settledRange, frame.zone],
  );
  const title = lane.unit === '' ? lane.title : `${lane.title}, ${lane.unit}`;
  return (
    <section className="chart-lane" aria-label={title}>
      <div className="chart-lane-head">
        <Heading level={2} variant="label">
          {title}
        </Heading>
        <Button
          kind="quiet"
          onPress={() => setIsTableShown(!isTableShown)}
          expanded={isTableShown}
          controls={isTableShown ? tablesId : undefined}
          name={`${isTableShown ? 'Hide table' : 'Show as table'}: ${lane.title}`}
        >
          {isTableShown ? 'Hide table' : 'Show as table'}
        </Button>
      </div>
      <div className="chart-lane-plot" role="img" aria-label={summary} style={{ height: frame.heightPx }}>
        <LaneUnder model={model} />
        <DenseTraces model={model} tokens={tokens} />
        <LaneOver model={model} />
        {crosshairX !== null && <LaneCrosshair size={model} x={crosshairX} />}
      </div>
      {isTableShown && (
        <div id={tablesId} className="chart-lane-tables">
          {tables.map((table) => (
            <LaneTableView key={table.id} table={table} />
          ))}
        </div>
      )}
    </section>
  );
});
