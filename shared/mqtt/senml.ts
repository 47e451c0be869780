import { z } from 'zod';

/** Times below 2^28 s are relative to now (RFC 8428, section 4.5.3). */
const RELATIVE_BELOW_SECONDS = 2 ** 28;

/** The version of the format that RFC 8428 defines (section 4.1), and the newest that is understood. */
export const SENML_VERSION = 10;

const recordSchema = z.object({
  bn: z.string().optional(),
  bt: z.number().optional(),
  bu: z.string().optional(),
  bv: z.number().optional(),
  bs: z.number().optional(),
  bver: z.number().int().positive().optional(),
  n: z.string().optional(),
  u: z.string().optional(),
  v: z.number().optional(),
  vs: z.string().optional(),
  vb: z.boolean().optional(),
  vd: z.string().optional(),
  s: z.number().optional(),
  t: z.number().optional(),
  ut: z.number().optional(),
});
const packSchema = z.array(recordSchema);

/** A record that stands by itself (RFC 8428, section 4.6). */
export interface SenmlRecord {
  name: string;
  unit: string | null;
  /** Unix seconds. */
  timeSeconds: number;
  /** False when the time was relative to now, so that sending the record again gives another time. */
  isTimeAbsolute: boolean;
  value: number | null;
  stringValue: string | null;
  booleanValue: boolean | null;
  /** As sent: base64url without padding. */
  dataValue: string | null;
  sum: number | null;
  updateSeconds: number | null;
}

export type SenmlRefusal = 'wrong-shape' | 'not-finite' | 'unsupported-version' | 'must-understand';

export type SenmlResolution =
  { isResolved: true; version: number; records: SenmlRecord[] } | { isResolved: false; reason: SenmlRefusal; detail: string };

const refused = (reason: SenmlRefusal, detail: string): SenmlResolution => ({ isResolved: false, reason, detail });

/** RFC 8428, section 4.5.1: letters, digits and `-:./_`, beginning with a letter or digit. */
const namePattern = /^[A-Za-z0-9][A-Za-z0-9\-:./_]*$/;

/** Numbers that JSON can write and a double cannot hold, such as `1e999`, arrive as infinity. */
function hasInfinity(pack: unknown[]): boolean {
  return pack.some(
    (record) =>
      typeof record === 'object' &&
      record !== null &&
      Object.values(record).some((field) => typeof field === 'number' && Math.abs(field) === Infinity),
  );
}

/** A field whose name ends in `_` must be understood by whoever reads the pack (RFC 8428, section 4.4). */
function unknownMustField(pack: unknown[]): string | undefined {
  for (const record of pack) {
    if (typeof record !== 'object' || record === null) continue;
    for (const field in record) if (field.endsWith('_')) return field;
  }
  return undefined;
}

/**
 * Resolves a SenML pack that was parsed from JSON: base fields are added in, relative times become absolute, and the
 * records come in chronological order (RFC 8428, sections 4.1 to 4.6). A record with base fields only is none.
 *
 * @param nowSeconds Unix seconds that relative times, and records without a time, refer to.
 * @example resolveSenml([{ bn: 'tank:', bt: 1320067464, bu: 'Cel' }, { n: 't1', v: 25.1, t: 10 }], 0)
 * // one record: tank:t1, 25.1 Cel at 1320067474
 */
export function resolveSenml(pack: unknown, nowSeconds: number): SenmlResolution {
  const parsed = packSchema.safeParse(pack);
  if (!Array.isArray(pack)) return refused('wrong-shape', 'A pack is a JSON array');
  if (!parsed.success) {
    if (hasInfinity(pack)) return refused('not-finite', 'A number is too large to be held');
    const [issue] = parsed.error.issues;
    return refused('wrong-shape', `${issue?.path.join('.') ?? ''}: ${issue?.message ?? ''}`);
  }
  const mustField = unknownMustField(pack);
  if (mustField !== undefined) return refused('must-understand', `The field ${mustField} is not understood`);

  const records: SenmlRecord[] = [];
  const base = { name: '', seconds: 0, unit: null as string | null, value: 0, sum: 0, version: SENML_VERSION };
  for (const record of parsed.data) {
    base.name = record.bn ?? base.name;
    base.seconds = record.bt ?? base.seconds;
    base.unit = record.bu ?? base.unit;
    base.value = record.bv ?? base.value;
    base.sum = record.bs ?? base.sum;
    base.version = record.bver ?? base.version;
    if (base.version > SENML_VERSION) return refused('unsupported-version', `Version ${base.version} is not understood`);

    const values = [record.v, record.vs, record.vb, record.vd].filter((value) => value !== undefined).length;
    if (values > 1) return refused('wrong-shape', 'A record has more than one value');
    if (values === 0 && record.s === undefined) continue;

    const name = base.name + (record.n ?? '');
    if (!namePattern.test(name)) return refused('wrong-shape', `The name ${JSON.stringify(name)} is not one of SenML`);
    const seconds = base.seconds + (record.t ?? 0);
    const isTimeAbsolute = seconds >= RELATIVE_BELOW_SECONDS;
    const timeSeconds = isTimeAbsolute ? seconds : nowSeconds + seconds;
    const value = record.v === undefined ? null : base.value + record.v;
    const sum = record.s === undefined ? null : base.sum + record.s;
    if (![timeSeconds, value ?? 0, sum ?? 0].every(Number.isFinite))
      return refused('not-finite', 'A sum of numbers is too large to be held');
    records.push({
      name,
      unit: record.u ?? base.unit,
      timeSeconds,
      isTimeAbsolute,
      value,
      stringValue: record.vs ?? null,
      booleanValue: record.vb ?? null,
      dataValue: record.vd ?? null,
      sum,
      updateSeconds: record.ut ?? null,
    });
  }
  records.sort((one, other) => one.timeSeconds - other.timeSeconds);
  return { isResolved: true, version: base.version, records };
}
