import { useState } from 'react';
import { isAtLeast } from '#shared/domain/role.ts';
import type { System } from '#shared/contract/systems.ts';
import { useAlarmRules } from '../../hooks/use-alarms.ts';
import { useBreakpoint } from '../../hooks/use-breakpoint.ts';
import { useFreshness } from '../../hooks/use-freshness.ts';
import { useNow } from '../../hooks/use-now.ts';
import { useHandDoses } from '../../hooks/use-records.ts';
import { useReservoirs } from '../../hooks/use-rig.ts';
import { useSystem } from '../../hooks/use-systems.ts';
import { useSeries } from '../../hooks/use-telemetry.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { formatNear } from '../../lib/format/time.ts';
import { systemSentence } from '../../lib/sentences/system-sentence.ts';
import { EmptyState } from '../ui/empty-state.tsx';
import { Heading } from '../ui/heading.tsx';
import { LiveRegion } from '../ui/live-region.tsx';
import { Notice } from '../ui/notice.tsx';
import { Screen } from '../ui/screen.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { VisuallyHidden } from '../ui/visually-hidden.tsx';
import { FirstMinutes } from './first-minutes.tsx';
import { HandDoseSheet } from './hand-dose-sheet.tsx';
import { TodayPart } from './today-part.tsx';
import './watch.css';
import { bottleRows, dueLines, firstChecklist, heardAtMs, heardWords, nutrientRows, probeRows } from './watch-model.ts';
import { BottleRows, DueLines, NutrientRows, ProbeRows } from './watch-rows.tsx';

/** The system now. */
export function WatchScreen({ systemId }: { systemId: string }) {
  const system = useSystem(systemId);
  useTitle('Watch', system.data?.name);
  if (system.data !== undefined) return <Watch system={system.data} />;
  return (
    <Screen>
      <Heading level={1}>Watch</Heading>
      {system.isError ? (
        <Notice error={system.error} onRetry={() => void system.refetch()} />
      ) : (
        <Skeleton lines={3} name="Loading the system" />
      )}
    </Screen>
  );
}

/** Ages in seconds move each second, as long as somebody looks. */
const everySecondMs = 1000;

function Watch({ system }: { system: System }) {
  const { id: systemId, timeZone, status } = system;
  const nowMs = useNow(everySecondMs);
  const { staleSinceMs } = useFreshness();
  const isPhone = useBreakpoint() === 'phone';
  const series = useSeries(systemId);
  const reservoirs = useReservoirs(systemId);
  const rules = useAlarmRules(systemId);
  const handDoses = useHandDoses(systemId);
  const [isHandDoseOpen, setIsHandDoseOpen] = useState(false);
  const [said, setSaid] = useState('');

  const mayLog = isAtLeast(system.role, 'sitter');
  const due = dueLines(status, reservoirs.data ?? [], timeZone, nowMs);
  const bottles = bottleRows(reservoirs.data ?? [], timeZone, nowMs);
  const probes = probeRows(series.data ?? [], timeZone, nowMs);
  const isKnown = rules.data !== undefined && handDoses.data !== undefined;
  const checklist = isKnown
    ? firstChecklist({
        system,
        hasHandDose: handDoses.data.length > 0,
        hasLimit: rules.data.some((rule) => rule.enabled && rule.code.startsWith('volume-') && rule.effectiveHard !== null),
      })
    : null;

  const title = <Heading level={1}>Watch</Heading>;
  return (
    <Screen>
      {isPhone ? <VisuallyHidden>{title}</VisuallyHidden> : title}
      <section className="watch-section" aria-label="State">
        <Text variant="note" soft>
          {staleSinceMs === null
            ? heardWords(heardAtMs(status, series.data ?? [], nowMs), timeZone, nowMs)
            : `as of ${formatNear(staleSinceMs, timeZone, nowMs)}`}
        </Text>
        <Text variant={isPhone ? 'sentence' : 'sentenceWide'}>{systemSentence(system, nowMs, staleSinceMs)}</Text>
        <LiveRegion>{said === '' ? null : <Text bold>{said}</Text>}</LiveRegion>
      </section>
      {checklist !== null && mayLog && (
        <FirstMinutes
          lines={checklist}
          systemId={systemId}
          mayConnect={isAtLeast(system.role, 'keeper')}
          onHandDose={() => setIsHandDoseOpen(true)}
        />
      )}
      <TodayPart system={system} nowMs={nowMs} isStale={staleSinceMs !== null} onHandDose={mayLog ? () => setIsHandDoseOpen(true) : null} />
      {due.length > 0 && <DueLines lines={due} systemId={systemId} />}
      <section className="watch-section" aria-labelledby="watch-nutrients">
        <Heading level={2} id="watch-nutrients" variant="label">
          Nutrients
        </Heading>
        <NutrientRows rows={nutrientRows(status, nowMs)} />
      </section>
      {bottles.length > 0 && (
        <section className="watch-section" aria-labelledby="watch-bottles">
          <Heading level={2} id="watch-bottles" variant="label">
            Bottles
          </Heading>
          <BottleRows rows={bottles} />
        </section>
      )}
      <section className="watch-section" aria-labelledby="watch-probes">
        <Heading level={2} id="watch-probes" variant="label">
          Probes
        </Heading>
        {series.isError ? <Notice error={series.error} onRetry={() => void series.refetch()} /> : null}
        {series.isPending ? <Skeleton lines={4} lineHeight={44} name="Loading the probes" /> : null}
        {series.data?.length === 0 ? (
          <EmptyState sentence="No probe is connected. Doses and tests work without one." />
        ) : (
          <ProbeRows rows={probes} />
        )}
      </section>
      {isHandDoseOpen && (
        <HandDoseSheet
          system={system}
          onClose={() => setIsHandDoseOpen(false)}
          onDone={(sentence) => {
            setIsHandDoseOpen(false);
            setSaid(sentence);
          }}
        />
      )}
    </Screen>
  );
}
