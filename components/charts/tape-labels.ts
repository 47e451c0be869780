import type { TapeModel } from './drop-tape-model.ts';

/** Widths of the texts under the tape at the size of notes, in rem: `00:00` and a bold `now`. */
const hourRem = 2.2;
const nowRem = 1.7;
const gapRem = 0.3;

export interface TapeLabel {
  readonly key: string;
  /** The middle of the text. */
  readonly x: number;
  readonly label: string;
}

/** A text of this width that is wholly in sight, as near to `x` as that allows. */
const inSight = (x: number, width: number, widthPx: number) => Math.min(Math.max(x, width / 2), Math.max(widthPx - width / 2, width / 2));

/** The hours under the tape and `now` among them, which takes the place only of those that it would touch. */
export function tapeLabels(model: Pick<TapeModel, 'hours' | 'nowX' | 'widthPx'>, remPx: number): { hours: TapeLabel[]; now: TapeLabel } {
  const now = { key: 'now', x: inSight(model.nowX, nowRem * remPx, model.widthPx), label: 'now' };
  const leastPx = ((hourRem + nowRem) / 2 + gapRem) * remPx;
  const hours = model.hours
    .map((hour) => ({ key: String(hour.x), x: inSight(hour.x, hourRem * remPx, model.widthPx), label: hour.label }))
    .filter((hour) => Math.abs(hour.x - now.x) >= leastPx);
  return { hours, now };
}

/** Scrolled at most as far as wanted, and not into the middle of an hour's text. */
export function scrollBetweenLabels(hourXs: readonly number[], wantedX: number, remPx: number): number {
  const half = ((hourRem + gapRem) / 2) * remPx;
  const cut = hourXs.find((x) => Math.abs(x - wantedX) < half);
  return cut === undefined ? wantedX : Math.max(0, cut - half);
}
