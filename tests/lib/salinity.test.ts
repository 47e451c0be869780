import { describe, expect, it } from 'vitest';
import type { Quantity, Series } from '#shared/contract/telemetry.ts';
import { isSameWater, latestSalinity, salinityPair } from '../../lib/salinity.ts';
import { nowMs, testId } from '../helpers/client-fixtures.ts';

const minuteMs = 60_000;
const series = (quantity: Quantity, lastValue: number | null, agoMs = 0, rest: Partial<Series> = {}): Series => ({
  id: quantity,
  systemId: testId(1),
  deviceId: testId(40),
  channel: quantity,
  name: null,
  quantity,
  unit: '',
  lastT: lastValue === null ? null : nowMs - agoMs,
  lastValue,
  conflicts: 0,
  ...rest,
});

describe('salinity from two probes', () => {
  // PSS-78: the conductivity of standard seawater, 42.914 mS/cm, at 15 degC is salinity 35.
  it('is that of PSS-78, as fresh as the older of the two', () => {
    const latest = latestSalinity([series('conductivity', 42.914, 2 * minuteMs), series('temperature', 15, 14 * minuteMs)]);
    expect(latest?.salinity).toBeCloseTo(35, 2);
    expect(latest?.atMs).toBe(nowMs - 14 * minuteMs);
  });

  it.each([
    ['one is missing', [series('conductivity', 53)]],
    ['one has not reported', [series('conductivity', 53), series('temperature', null)]],
    ['they are over 15 minutes apart', [series('conductivity', 53), series('temperature', 25, 16 * minuteMs)]],
    ['the probe is in air', [series('conductivity', 0), series('temperature', 25)]],
  ])('is not told where %s', (_, all) => {
    expect(latestSalinity(all)).toBeNull();
  });

  it('takes the thermometer of the same device', () => {
    const other = series('temperature', 20, 0, { id: 'other', deviceId: testId(41) });
    const pair = salinityPair([other, series('temperature', 25), series('conductivity', 53)]);
    expect(pair?.temperature.id).toBe('temperature');
    expect(salinityPair([other, series('conductivity', 53)])?.temperature.id).toBe('other');
  });

  it('tells nothing of a reading from long before', () => {
    const latest = latestSalinity([series('conductivity', 53), series('temperature', 25)]);
    const old = series('oxygen-percent', 95, 20 * minuteMs);
    expect(latest !== null && [isSameWater(series('oxygen-percent', 95), latest), isSameWater(old, latest)]).toEqual([true, false]);
  });
});
