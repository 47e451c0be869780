import { describe, expect, it } from 'vitest';
import { type RankedFacts, systemRank } from '#shared/domain/system-rank.ts';

const nowMs = Date.parse('2026-03-10T12:00:00Z');
const fresh = { at: '2026-03-09T12:00:00Z' };
const calm: RankedFacts = {
  worstPriority: null,
  latched: false,
  offlineDevices: 0,
  carbonHeads: 1,
  stoppedHeads: 0,
  nitrate: fresh,
  phosphate: fresh,
};

describe('the rank of a system', () => {
  it.each<[string, Partial<RankedFacts>]>([
    ['urgent', { worstPriority: 'urgent', latched: true, offlineDevices: 1 }],
    ['latched', { worstPriority: 'high', latched: true, offlineDevices: 1 }],
    ['latched', { latched: true }],
    ['high', { worstPriority: 'high', offlineDevices: 1 }],
    ['unheard', { offlineDevices: 1, worstPriority: 'low' }],
    ['unheard', { offlineDevices: 1, worstPriority: 'medium' }],
    ['alarm', { worstPriority: 'medium', stoppedHeads: 1 }],
    ['alarm', { worstPriority: 'low' }],
    ['due', { stoppedHeads: 1 }],
    ['due', { nitrate: null }],
    ['due', { phosphate: { at: '2026-03-03T11:59:59Z' } }],
    ['quiet', { phosphate: { at: '2026-03-03T12:00:00Z' } }],
    ['quiet', { carbonHeads: 0, nitrate: null, phosphate: null }],
    ['quiet', {}],
  ])('is %s for %j', (rank, facts) => {
    expect(systemRank({ ...calm, ...facts }, nowMs)).toBe(rank);
  });
});
