import { useMemo, useState, type ReactNode } from 'react';
import { isAtLeast } from '#shared/domain/role.ts';
import type { System } from '#shared/contract/systems.ts';
import { useBreakpoint } from '../../hooks/use-breakpoint.ts';
import { useTests } from '../../hooks/use-records.ts';
import { useSystem } from '../../hooks/use-systems.ts';
import { useSeries } from '../../hooks/use-telemetry.ts';
import { useTheme } from '../../hooks/use-theme.ts';
import { useTitle } from '../../hooks/use-title.ts';
import { ChartStack } from '../charts/chart-stack.tsx';
import { ContextStrip } from '../charts/context-strip.tsx';
import { readLanes } from '../charts/nearest.ts';
import { presets } from '../charts/presets.ts';
import { spanOf } from '../charts/time-axis.ts';
import { Button } from '../ui/button.tsx';
import { Checkbox } from '../ui/checkbox.tsx';
import { Heading } from '../ui/heading.tsx';
import { Notice } from '../ui/notice.tsx';
import { Screen } from '../ui/screen.tsx';
import { SegmentedControl } from '../ui/segmented-control.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { VisuallyHidden } from '../ui/visually-hidden.tsx';
import './overlay.css';
import { OverlayReadout } from './overlay-readout.tsx';
import { groupProbes } from './probe-lanes.ts';
import { rangeSentence } from './range-sentence.ts';
import { useOverlayLanes } from './use-overlay-lanes.ts';
import { useOverlayView } from './use-overlay-view.ts';

export interface OverlayScreenProps {
  systemId: string;
  /** Draws the sheet for a test, `null` for a new one; given by the route, since tests are another feature. */
  renderTestSheet?: (testId: string | null, onClose: () => void) => ReactNode;
}

/** Tests, doses and probes over one time axis. */
export function OverlayScreen(props: OverlayScreenProps) {
  const system = useSystem(props.systemId);
  useTitle('Overlay', system.data?.name);
  if (system.data === undefined) {
    return (
      <Screen wide>
        <Heading level={1}>Overlay</Heading>
        {system.isError ? (
          <Notice error={system.error} onRetry={() => void system.refetch()} />
        ) : (
          <Skeleton lines={8} name="Loading the overlay" />
        )}
      </Screen>
    );
  }
  return <Overlay {...props} system={system.data} />;
}

const laneHeightPx = { phone: 96, wide: 128 };

function Overlay({ system, systemId, renderTestSheet }: OverlayScreenProps & { system: System }) {
  const zone = system.timeZone;
  const isPhone = useBreakpoint() === 'phone';
  const { tokens } = useTheme();
  const tests = useTests(systemId);
  const series = useSeries(systemId);
  const [unfolded, setUnfolded] = useState<ReadonlyMap<string, boolean>>(new Map());
  const [sheet, setSheet] = useState<{ readonly testId: string | null } | null>(null);

  const earliestTestMs = useMemo(() => Math.min(...(tests.data ?? []).map((test) => Date.parse(test.at)), Infinity), [tests.data]);
  const { view, settledRange, limits, preset, nowMs, onView, onHold, choosePreset } = useOverlayView(earliestTestMs);

  const groups = useMemo(() => groupProbes(series.data ?? []), [series.data]);
  // On a phone one probe stands open, the others are a press away.
  const isOpen = (id: string, folded: boolean, i: number) => unfolded.get(id) ?? (isPhone ? i === 0 : !folded);
  const open = groups.filter((group, i) => isOpen(group.id, group.folded, i));
  const openKey = open.map((group) => group.id).join('|');
  // eslint-disable-next-line react-hooks/exhaustive-deps -- `open` is made anew on each render; what it holds follows these two
  const openGroups = useMemo(() => open, [openKey, groups]);
  const { nutrients, dose, probes, error } = useOverlayLanes(systemId, settledRange, zone, tests.data, openGroups);
  const lanes = useMemo(() => [...nutrients, dose, ...probes], [nutrients, dose, probes]);

  const { crosshairMs } = view;
  const isCrosshairSeen = crosshairMs !== null && crosshairMs >= view.range.fromMs && crosshairMs <= view.range.toMs;
  const nearMs = spanOf(view.range) / 100;
  const readings = useMemo(
    () => (isCrosshairSeen ? readLanes(lanes, crosshairMs, nearMs) : []),
    [lanes, isCrosshairSeen, crosshairMs, nearMs],
  );
  const whole = { fromMs: limits.earliestMs, toMs: nowMs };
  const mayLog = renderTestSheet !== undefined && isAtLeast(system.role, 'sitter');

  // On a phone the tab says where one is, and the room is for the lanes.
  const title = <Heading level={1}>Overlay</Heading>;
  const logButton = mayLog ? <Button onPress={() => setSheet({ testId: null })}>Write down a test</Button> : null;
  const readout = !isCrosshairSeen ? null : (
    <OverlayReadout
      crosshairMs={crosshairMs}
      readings={readings}
      zone={zone}
      onEditTest={mayLog ? (testId) => setSheet({ testId }) : undefined}
    />
  );
  return (
    <Screen wide footer={readout}>
      {isPhone ? <VisuallyHidden>{title}</VisuallyHidden> : title}
      <div className="overlay-head">
        <Text variant={isPhone ? 'sentence' : 'sentenceWide'}>
          {rangeSentence(preset?.words ?? null, settledRange, zone, nutrients, dose)}
        </Text>
        {!isPhone && logButton}
      </div>
      {[tests.error, series.error, error]
        .filter((one) => one !== null)
        .slice(0, 1)
        .map((one) => (
          <Notice key="error" error={one} onRetry={() => void Promise.all([tests.refetch(), series.refetch()])} />
        ))}
      <div className="overlay-presets">
        <SegmentedControl
          name="Time shown"
          value={preset?.id ?? ''}
          onChange={(id) => presets.filter((one) => one.id === id).forEach(choosePreset)}
          options={presets.map((one) => ({ value: one.id, label: one.label }))}
        />
      </div>
      <ChartStack
        lanes={lanes}
        view={view}
        settledRange={settledRange}
        limits={limits}
        zone={zone}
        laneHeightPx={isPhone ? laneHeightPx.phone : laneHeightPx.wide}
        readings={readings}
        tokens={tokens}
        onView={onView}
        onHold={onHold}
      />
      <ContextStrip
        whole={whole}
        range={view.range}
        limits={limits}
        zone={zone}
        rows={nutrients.map((lane) => ({
          shape: lane.tests?.shape ?? 'circle',
          times: (lane.tests?.points ?? []).map((point) => point.tMs),
        }))}
        onRange={(range) => onView({ range, crosshairMs })}
        onHold={onHold}
      />
      {groups.length > 0 && (
        <div className="overlay-folded" role="group" aria-labelledby="overlay-probes">
          <Heading level={2} id="overlay-probes" variant="label">
            Probes shown
          </Heading>
          {groups.map((group, i) => {
            const isShown = isOpen(group.id, group.folded, i);
            return (
              <Checkbox
                key={group.id}
                label={group.title}
                checked={isShown}
                onChange={() => setUnfolded(new Map(unfolded).set(group.id, !isShown))}
              />
            );
          })}
        </div>
      )}
      {isPhone && logButton}
      {sheet !== null && renderTestSheet?.(sheet.testId, () => setSheet(null))}
    </Screen>
  );
}
