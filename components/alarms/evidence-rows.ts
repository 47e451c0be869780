import { z } from 'zod';
import type { Alarm } from '#shared/contract/alarms.ts';
import { formatMl } from '../../lib/format/millilitres.ts';
import { formatNumber } from '../../lib/format/number.ts';
import { formatClockWithSeconds, formatNear } from '../../lib/format/time.ts';

export interface EvidenceRow {
  label: string;
  value: string;
}

export interface EvidenceDose {
  key: string;
  time: string;
  ml: string;
  source: string;
}

const timestamp = z.string().nullish();
const evidenceSchema = z.object({
  windowFrom: timestamp,
  windowTo: timestamp,
  givenMl: z.number().nullish(),
  plannedMl: z.number().nullish(),
  largestSlotMl: z.number().nullish(),
  ceilingMlPerDay: z.number().nullish(),
  givenOnStoppedHeadsMl: z.number().nullish(),
  begunAt: timestamp,
  dueAt: timestamp,
  endedAt: timestamp,
  expectedSeconds: z.number().nullish(),
  longestSeconds: z.number().nullish(),
  mostMl: z.number().nullish(),
  heardAt: timestamp,
  recordedOnly: z.boolean().nullish(),
});

const doseSchema = z.object({
  at: z.string(),
  ml: z.number(),
  source: z.string(),
  sourceId: z.string(),
  cause: z.string().nullish(),
  head: z.number().nullish(),
  onStoppedHead: z.boolean().nullish(),
});

/** The facts that the alarm rests on, in the order in which a person asks for them; what is not known is left out. */
export function evidenceRows(alarm: Alarm, timeZone: string, nowMs: number): EvidenceRow[] {
  const known = evidenceSchema.safeParse(alarm.evidence);
  if (!known.success) return [];
  const facts = known.data;
  const time = (at: string | null | undefined) => (at == null ? null : formatNear(at, timeZone, nowMs));
  const ml = (volume: number | null | undefined) => (volume == null ? null : formatMl(volume));
  const seconds = (duration: number | null | undefined) => (duration == null ? null : `${formatNumber(duration, duration < 10 ? 1 : 0)} s`);
  const stoppedMl = facts.givenOnStoppedHeadsMl;
  const rows: [string, string | null][] = [
    ['Window from', time(facts.windowFrom)],
    ['Window to', time(facts.windowTo)],
    ['Given', ml(facts.givenMl)],
    ['Planned in the window', ml(facts.plannedMl)],
    ['Largest portion planned', ml(facts.largestSlotMl)],
    ['Ceiling a day', ml(facts.ceilingMlPerDay)],
    ['Given by stopped heads', stoppedMl ? ml(stoppedMl) : null],
    ['Due', time(facts.dueAt)],
    ['Began', time(facts.begunAt)],
    ['Ended', time(facts.endedAt)],
    ['Expected to take', seconds(facts.expectedSeconds)],
    ['Longest allowed', seconds(facts.longestSeconds)],
    ['Most allowed', ml(facts.mostMl)],
    ['Last heard', time(facts.heardAt)],
    ['Told late', facts.recordedOnly === true ? 'its window had closed: recorded, nobody was called' : null],
  ];
  return rows.flatMap(([label, value]) => (value === null ? [] : [{ label, value }]));
}

const causeWords: Record<string, string> = {
  schedule: 'schedule',
  order: 'order',
  button: 'button at the pump',
  prime: 'priming',
  calibration: 'calibration',
};

/** The doses that counted in the window, newest first. */
export function evidenceDoses(alarm: Alarm, timeZone: string): EvidenceDose[] {
  const listed = z.array(doseSchema).safeParse(alarm.evidence.doses);
  if (!listed.success) return [];
  return [...listed.data].reverse().map((dose) => {
    const pump = `head ${dose.head ?? '?'}, ${causeWords[dose.cause ?? ''] ?? 'cause unknown'}${dose.onStoppedHead === true ? ', stopped head' : ''}`;
    return {
      key: dose.sourceId,
      time: formatClockWithSeconds(dose.at, timeZone),
      ml: formatMl(dose.ml),
      source: dose.source === 'hand' ? 'by hand' : pump,
    };
  });
}
