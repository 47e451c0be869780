import { describe, expect, it } from 'vitest';
import { scrollBetweenLabels, tapeLabels } from '../../../components/charts/tape-labels.ts';

const hours = [10, 100, 190, 280, 350].map((x, i) => ({ x, label: `0${i}:00`, isDayStart: false }));
const labels = (nowX: number) => tapeLabels({ hours, nowX, widthPx: 360 }, 16);

describe('the hours under the tape', () => {
  it('stand wholly in sight, the first and the last too', () => {
    const { hours: shown, now } = labels(145);
    expect(shown.map((hour) => hour.x)).toEqual([17.6, 100, 190, 280, 342.4]);
    expect(now.x).toBe(145);
  });

  it.each([
    [100, ['00:00', '02:00', '03:00', '04:00']],
    [130, ['00:00', '02:00', '03:00', '04:00']],
    [137, ['00:00', '01:00', '02:00', '03:00', '04:00']],
    [10, ['01:00', '02:00', '03:00', '04:00']],
  ])('give way to a now at %d only where the two would touch', (nowX, shown) => {
    expect(labels(nowX).hours.map((hour) => hour.label)).toEqual(shown);
  });

  it('are not cut by where the tape is scrolled to', () => {
    expect(scrollBetweenLabels([10, 100, 190], 95, 16)).toBe(80);
    expect(scrollBetweenLabels([10, 100, 190], 110, 16)).toBe(80);
    expect(scrollBetweenLabels([10, 100, 190], 140, 16)).toBe(140);
    expect(scrollBetweenLabels([10], 5, 16)).toBe(0);
  });
});
