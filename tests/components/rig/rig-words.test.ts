import { describe, expect, it } from 'vitest';
import type { Device } from '#shared/contract/devices.ts';
import type { Product } from '#shared/contract/products.ts';
import { clockWords, heardWords, scheduleWords } from '../../../components/rig/device-words.ts';
import { labelWords, strengthWords } from '../../../components/rig/product-words.ts';

const nowMs = Date.parse('2026-03-01T14:00:00Z');
const id = '0198f000-0000-7000-8000-000000000001';
const state: NonNullable<Device['state']> = {
  deviceId: id,
  online: true,
  heardAt: '2026-03-01T13:59:48Z',
  changedAt: '2026-03-01T08:00:00Z',
  scheduleVersion: 7,
  clockOffsetSeconds: 0,
  clockUnset: false,
  heads: [],
};
const device: Device = { id, systemId: id, name: 'Doser', kind: 'pump', state, publishedScheduleVersion: 7, rejects: 0 };

describe('a device in words', () => {
  it('is never said to be heard when it was not', () => {
    expect(heardWords(device, 'UTC', nowMs).words).toBe('heard 12 s ago');
    expect(heardWords({ ...device, state: { ...state, online: false, changedAt: '2026-03-01T13:52:00Z' } }, 'UTC', nowMs).words).toBe(
      'not heard since 13:52',
    );
    expect(heardWords({ ...device, state: null }, 'UTC', nowMs).words).toBe('not heard yet');
  });

  it('says that a schedule is on the pump only when the pump proves it', () => {
    expect(scheduleWords(device)).toBe('The pump runs this schedule.');
    expect(scheduleWords({ ...device, publishedScheduleVersion: 8 })).toContain('Not yet on the pump');
    expect(scheduleWords({ ...device, state: null })).toContain('Not yet on the pump');
    expect(scheduleWords({ ...device, publishedScheduleVersion: null })).toBeNull();
  });

  it('tells a clock that is off or unset from one that is right', () => {
    expect(clockWords(device)).toBeNull();
    expect(clockWords({ ...device, state: { ...state, clockOffsetSeconds: -86_400 } })).toContain('1440 min behind');
    expect(clockWords({ ...device, state: { ...state, clockUnset: true } })).toContain('not set');
  });
});

describe('a product in words', () => {
  const product: Product = {
    id,
    siteId: id,
    name: 'Carbon blend A',
    form: 'liquid',
    composition: [{ substance: 'ethanol', percentByVolume: 40 }],
    label: { ml: 2, maxMl: null, perLitres: 100, perDays: 1 },
    oxygenDemandMgPerMl: 657.8,
    carbonMgPerMl: 164.6,
  };

  it('says its label and its strength', () => {
    expect(labelWords(product)).toBe('Label: 2 mL per 100 L and day.');
    expect(labelWords({ ...product, label: { ml: 2, maxMl: 4, perLitres: 100, perDays: 7 } })).toBe(
      'Label: 2 to 4 mL per 100 L and 7 days.',
    );
    expect(strengthWords(product)).toBe('Carbon 165 mg/mL, oxygen demand 658 mg/mL.');
  });

  it('does not invent a strength', () => {
    expect(strengthWords({ ...product, oxygenDemandMgPerMl: null, carbonMgPerMl: null })).toContain('unknown');
  });
});
