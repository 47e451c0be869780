import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { type Claim, claimId, renewClaim } from '../../../server/requests/claim-id.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';

let opened: TestCore;

beforeEach(async () => {
  opened = await openTestCore(manualClock());
});

afterEach(() => opened.close());

const first: Claim = {
  siteId: 'a',
  kind: 'test:1',
  id: '0197a000-0000-7000-8000-000000000001',
  body: { x: 1, y: [2, { z: null }] },
  nowMs: 0,
};
const claim = (change: Partial<Claim> = {}) => opened.core.writer.commit((tx) => claimId(tx, { ...first, ...change }));

describe('an id made by a client', () => {
  it('is new once, and repeated with the same body in whatever order', async () => {
    expect(await claim()).toEqual({ id: first.id, isRepeated: false });
    expect(await claim({ body: { y: [2, { z: null }], x: 1 } })).toEqual({ id: first.id, isRepeated: true });
  });

  it.each<[string, Partial<Claim>]>([
    ['another body', { body: { x: 2 } }],
    ['another kind', { kind: 'test:2' }],
    ['another site', { siteId: 'b' }],
  ])('is refused for %s, in the same words', async (_, change) => {
    await claim();
    await expect(claim(change)).rejects.toMatchObject({
      rule: 'id-taken',
      message: 'This id is already in use with other content; send it with a new id',
    });
  });

  it('stands for its newest body once it is renewed', async () => {
    await claim();
    await opened.core.writer.commit((tx) => renewClaim(tx, { ...first, id: first.id ?? '', body: { x: 3 } }));
    expect(await claim({ body: { x: 3 } })).toMatchObject({ isRepeated: true });
    await expect(claim()).rejects.toMatchObject({ rule: 'id-taken' });
  });
});

describe('without an id', () => {
  it('gives a new one each time', async () => {
    const one = await claim({ id: undefined });
    const other = await claim({ id: undefined });
    expect(one.isRepeated || other.isRepeated).toBe(false);
    expect(one.id).not.toBe(other.id);
  });
});
