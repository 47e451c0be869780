import { useMemo, useState } from 'react';
import type { System } from '#shared/contract/systems.ts';
import { useHeads } from '../../hooks/use-rig.ts';
import { useRuns, useTape } from '../../hooks/use-telemetry.ts';
import { DropTape } from '../charts/drop-tape.tsx';
import type { TapeItem } from '../charts/drop-tape-model.ts';
import { Button } from '../ui/button.tsx';
import { Heading } from '../ui/heading.tsx';
import { Notice } from '../ui/notice.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { PortionSheet } from './portion-sheet.tsx';
import { todayFigure } from './watch-model.ts';

export interface TodayPartProps {
  system: System;
  nowMs: number;
  isStale: boolean;
  /** Null for who may not write doses down. */
  onHandDose: (() => void) | null;
}

/** Today's one figure, and the tape. */
export function TodayPart({ system, nowMs, isStale, onHandDose }: TodayPartProps) {
  const tape = useTape(system.id);
  const heads = useHeads(system.id);
  const runs = useRuns(system.id);
  const [opened, setOpened] = useState<TapeItem | null>(null);
  const { figure, note } = todayFigure(system.status, tape.data);
  const headNames = useMemo(
    () => new Map((heads.data ?? []).map((head) => [`${head.deviceId} ${head.head}`, `${head.deviceName}, head ${head.head}`])),
    [heads.data],
  );
  const headName = (deviceId: string | null, head: number | null) =>
    head === null ? 'by hand' : (headNames.get(`${deviceId ?? ''} ${head}`) ?? `head ${head}`);
  // The now-line moves by a pixel in minutes; the tape is not laid out each second.
  const minuteMs = Math.floor(nowMs / 60_000) * 60_000;
  const run = opened === null ? null : (runs.data?.find((one) => one.id === opened.runId && one.deviceId === opened.deviceId) ?? null);
  return (
    <section className="watch-section" aria-labelledby="watch-today">
      <div className="watch-section-head">
        <Heading level={2} id="watch-today" variant="label">
          Carbon today
        </Heading>
        {onHandDose !== null && (
          <Button kind="quiet" onPress={onHandDose}>
            Dose by hand
          </Button>
        )}
      </div>
      <div className="watch-figure">
        <Text variant="figure" soft={isStale}>
          {figure}
        </Text>
        <Text soft>{note}</Text>
      </div>
      {tape.isError ? <Notice error={tape.error} onRetry={() => void tape.refetch()} /> : null}
      {tape.data === undefined ? (
        tape.isError ? null : (
          <Skeleton lines={2} lineHeight={36} name="Loading the tape" />
        )
      ) : (
        <DropTape tape={tape.data} zone={system.timeZone} nowMs={minuteMs} headName={headName} onOpen={setOpened} />
      )}
      {opened !== null && (
        <PortionSheet
          item={opened}
          run={run}
          system={system}
          nowMs={nowMs}
          headName={headName(opened.deviceId, opened.head)}
          onClose={() => setOpened(null)}
        />
      )}
    </section>
  );
}
