import { describe, expect, it } from 'vitest';
import { resolveSenml, type SenmlRecord } from '#shared/mqtt/senml.ts';

const nowSeconds = 1_772_366_400;

function resolved(pack: unknown): SenmlRecord[] {
  const resolution = resolveSenml(pack, nowSeconds);
  if (!resolution.isResolved) throw new Error(resolution.detail);
  return resolution.records;
}

function refusal(pack: unknown): string | null {
  const resolution = resolveSenml(pack, nowSeconds);
  return resolution.isResolved ? null : resolution.reason;
}

const short = ({ name, unit, timeSeconds, value }: SenmlRecord) => [name, unit, timeSeconds, value];

describe('the examples of RFC 8428', () => {
  it('5.1.1: a single record without a time is of now', () => {
    expect(resolved([{ n: 'urn:dev:ow:10e2073a01080063', u: 'Cel', v: 23.1 }]).map(short)).toEqual([
      ['urn:dev:ow:10e2073a01080063', 'Cel', nowSeconds, 23.1],
    ]);
  });

  it('5.1.2, first pack: a base name is put before every name', () => {
    const pack = [
      { bn: 'urn:dev:ow:10e2073a01080063:', n: 'voltage', u: 'V', v: 120.1 },
      { n: 'current', u: 'A', v: 1.2 },
    ];
    expect(resolved(pack).map(short)).toEqual([
      ['urn:dev:ow:10e2073a01080063:voltage', 'V', nowSeconds, 120.1],
      ['urn:dev:ow:10e2073a01080063:current', 'A', nowSeconds, 1.2],
    ]);
  });

  it('5.1.2, second pack: base time and unit apply, and the records come in the order of time', () => {
    const bn = 'urn:dev:ow:10e2073a0108006:';
    const pack = [
      { bn, bt: 1276020076.001, bu: 'A', bver: 5, n: 'voltage', u: 'V', v: 120.1 },
      ...[-5, -4, -3, -2, -1].map((t, index) => ({ n: 'current', t, v: Number((1.2 + index / 10).toFixed(1)) })),
      { n: 'current', v: 1.7 },
    ];
    const resolution = resolveSenml(pack, nowSeconds);
    expect(resolution.isResolved && resolution.version).toBe(5);
    expect(resolved(pack).map(short)).toEqual([
      [`${bn}current`, 'A', 1276020071.001, 1.2],
      [`${bn}current`, 'A', 1276020072.001, 1.3],
      [`${bn}current`, 'A', 1276020073.001, 1.4],
      [`${bn}current`, 'A', 1276020074.001, 1.5],
      [`${bn}current`, 'A', 1276020075.001, 1.6],
      [`${bn}voltage`, 'V', 1276020076.001, 120.1],
      [`${bn}current`, 'A', 1276020076.001, 1.7],
    ]);
  });

  it('5.1.2, third pack: a base name alone can be the whole name', () => {
    const values = [21.2, 21.3, 21.4, 21.4, 21.5, 21.5, 21.5, 21.6, 21.7];
    const pack = values.map((v, index) =>
      index === 0 ? { bn: 'urn:dev:ow:10e2073a01080063', bt: 1320067464, bu: '%RH', v } : { t: index * 10, v },
    );
    expect(resolved(pack).map(short)).toEqual(values.map((v, index) => ['urn:dev:ow:10e2073a01080063', '%RH', 1320067464 + index * 10, v]));
  });

  it('5.1.3 and 5.1.4: the pack resolves to the one that the document prints', () => {
    const pack = [
      { bn: 'urn:dev:ow:10e2073a01080063', bt: 1320067464, bu: '%RH', v: 20 },
      { u: 'lon', v: 24.30621 },
      { u: 'lat', v: 60.07965 },
      { t: 60, v: 20.3 },
      { u: 'lon', t: 60, v: 24.30622 },
      { u: 'lat', t: 60, v: 60.07965 },
      { t: 120, v: 20.7 },
      { u: 'lon', t: 120, v: 24.30623 },
      { u: 'lat', t: 120, v: 60.07966 },
      { u: '%EL', t: 150, v: 98 },
      { t: 180, v: 21.2 },
      { u: 'lon', t: 180, v: 24.30628 },
      { u: 'lat', t: 180, v: 60.07967 },
    ];
    const name = 'urn:dev:ow:10e2073a01080063';
    expect(resolved(pack).map(short)).toEqual([
      [name, '%RH', 1320067464, 20],
      [name, 'lon', 1320067464, 24.30621],
      [name, 'lat', 1320067464, 60.07965],
      [name, '%RH', 1320067524, 20.3],
      [name, 'lon', 1320067524, 24.30622],
      [name, 'lat', 1320067524, 60.07965],
      [name, '%RH', 1320067584, 20.7],
      [name, 'lon', 1320067584, 24.30623],
      [name, 'lat', 1320067584, 60.07966],
      [name, '%EL', 1320067614, 98],
      [name, '%RH', 1320067644, 21.2],
      [name, 'lon', 1320067644, 24.30628],
      [name, 'lat', 1320067644, 60.07967],
    ]);
  });

  it('5.1.5: text, booleans and data are values of their own', () => {
    const records = resolved([
      { bn: 'urn:dev:ow:10e2073a01080063:', n: 'temp', u: 'Cel', v: 23.1 },
      { n: 'label', vs: 'Machine Room' },
      { n: 'open', vb: false },
      { n: 'nfv-reader', vd: 'aGkgCg' },
    ]);
    expect(records.map(({ value, stringValue, booleanValue, dataValue }) => [value, stringValue, booleanValue, dataValue])).toEqual([
      [23.1, null, null, null],
      [null, 'Machine Room', null, null],
      [null, null, false, null],
      [null, null, null, 'aGkgCg'],
    ]);
  });

  it('5.1.7: a record with a base name only gives no record', () => {
    const pack = [
      { bn: 'urn:dev:ow:10e2073a01080063:' },
      { n: 'temp', u: 'Cel', v: 23.1 },
      { n: 'heat', u: '/', v: 1 },
      { n: 'fan', u: '/', v: 0 },
    ];
    expect(resolved(pack).map(short)).toEqual([
      ['urn:dev:ow:10e2073a01080063:temp', 'Cel', nowSeconds, 23.1],
      ['urn:dev:ow:10e2073a01080063:heat', '/', nowSeconds, 1],
      ['urn:dev:ow:10e2073a01080063:fan', '/', nowSeconds, 0],
    ]);
  });
});

describe('resolving a pack', () => {
  it('takes times from 2^28 on as absolute, and below as relative to now (section 4.5.3)', () => {
    const [relative, absolute] = resolved([
      { n: 'a', v: 1, t: 2 ** 28 },
      { n: 'b', v: 1, t: -10 },
    ]).reverse();
    expect(relative).toMatchObject({ name: 'b', timeSeconds: nowSeconds - 10, isTimeAbsolute: false });
    expect(absolute).toMatchObject({ name: 'a', timeSeconds: 2 ** 28, isTimeAbsolute: true });
  });

  it('adds base value and base sum (section 4.1)', () => {
    const records = resolved([{ bn: 'x', bv: 20, bs: 100, v: 0.5, s: 2 }, { v: 1.5 }, { s: 3 }]);
    expect(records.map(({ value, sum }) => [value, sum])).toEqual([
      [20.5, 102],
      [21.5, null],
      [null, 103],
    ]);
  });

  it('lets a later base value replace the one before', () => {
    expect(
      resolved([
        { bn: 'a', bu: 'Cel', v: 1 },
        { bn: 'b', bu: 'K', v: 2 },
      ]).map(short),
    ).toEqual([
      ['a', 'Cel', nowSeconds, 1],
      ['b', 'K', nowSeconds, 2],
    ]);
  });

  it.each([
    ['a pack that is no array', { n: 'a', v: 1 }, 'wrong-shape'],
    ['a record that is no object', [1], 'wrong-shape'],
    ['a value that is text', [{ n: 'a', v: '23' }], 'wrong-shape'],
    ['two values in one record (section 4.2)', [{ n: 'a', v: 1, vs: 'one' }], 'wrong-shape'],
    ['no name', [{ v: 1 }], 'wrong-shape'],
    ['a name that begins with a colon (section 4.5.1)', [{ n: ':a', v: 1 }], 'wrong-shape'],
    ['a name with a space (section 4.5.1)', [{ n: 'a b', v: 1 }], 'wrong-shape'],
    ['a number too large for a double', JSON.parse('[{"n":"a","v":1e999}]'), 'not-finite'],
    ['a sum too large for a double', [{ n: 'a', bv: 1.7e308, v: 1.7e308 }], 'not-finite'],
    ['a version above 10 (section 4.4)', [{ bver: 11, n: 'a', v: 1 }], 'unsupported-version'],
    ['a field that must be understood (section 4.4)', [{ n: 'a', v: 1, retain_: true }], 'must-understand'],
  ])('refuses %s', (_name, pack, reason) => {
    expect(refusal(pack)).toBe(reason);
  });

  it('ignores fields that it does not know and that need not be understood (section 4.4)', () => {
    expect(resolved([{ n: 'a', v: 1, colour: 'red' }])).toHaveLength(1);
  });
});
