import { useMemo } from 'react';
import type { Test } from '#shared/contract/records.ts';
import { useManyPoints } from '../../hooks/use-many-points.ts';
import { useHandDoses } from '../../hooks/use-records.ts';
import { useRunsBetween } from '../../hooks/use-runs-between.ts';
import { useDoses } from '../../hooks/use-telemetry.ts';
import type { LaneInput } from '../charts/lane-model.ts';
import type { TimeRange } from '../charts/time-axis.ts';
import { doseLane, showsPortions } from './dose-lane.ts';
import { fetchWindow, pointCount } from './fetch-window.ts';
import { nutrientLane } from './nutrient-lane.ts';
import { probeLane, type ProbeGroup } from './probe-lanes.ts';

/** As fine as the server gives it, so that a bucket falls into the right day of the site. */
const doseBuckets = 5000;

export interface OverlayLanes {
  readonly nutrients: readonly LaneInput[];
  readonly dose: LaneInput;
  readonly probes: readonly LaneInput[];
  readonly isFetching: boolean;
  readonly error: Error | null;
}

/** The lanes of a system over a range, from the cache where they are known, and from the server around the range. */
export function useOverlayLanes(
  systemId: string,
  range: TimeRange,
  zone: string,
  tests: readonly Test[] | undefined,
  groups: readonly ProbeGroup[],
): OverlayLanes {
  const window = useMemo(() => fetchWindow(range), [range]);
  const isNear = showsPortions(range);
  const doses = useDoses(systemId, window, doseBuckets);
  const handDoses = useHandDoses(systemId);
  const { runs } = useRunsBetween(systemId, window, isNear);
  // What is computed stands on series that may have a lane of their own too.
  const seriesIds = useMemo(() => [...new Set(groups.flatMap((group) => group.series.map((series) => series.id)))], [groups]);
  const points = useManyPoints(systemId, seriesIds, window, pointCount(range));

  const nutrients = useMemo(() => [nutrientLane('nitrate', tests), nutrientLane('phosphate', tests)], [tests]);
  const dose = useMemo(
    () => doseLane({ doses: doses.data, runs, handDoses: handDoses.data ?? [] }, isNear, zone),
    [doses.data, runs, handDoses.data, isNear, zone],
  );
  const { bySeriesId } = points;
  const probes = useMemo(() => groups.map((group) => probeLane(group, bySeriesId)), [groups, bySeriesId]);
  return { nutrients, dose, probes, isFetching: points.isFetching || doses.isFetching, error: points.error ?? doses.error };
}
