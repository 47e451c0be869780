import type { Head } from '#shared/contract/rig.ts';
import { formatMl } from '../../lib/format/millilitres.ts';
import { formatNumber } from '../../lib/format/number.ts';

/** `Doser, head 1` */
export const headName = (head: Pick<Head, 'deviceName' | 'head'>) => `${head.deviceName}, head ${head.head}`;

/** `12 portions of 0.35 mL a day, 4.2 mL in all` */
export function headScheduleWords(head: Head): string {
  const { schedule } = head;
  if (schedule === null || schedule.slotsUtcMin.length === 0) return 'No schedule.';
  const count = schedule.slotsUtcMin.length;
  const total = schedule.slotMl * count;
  return `${count} ${count === 1 ? 'portion' : 'portions'} of ${formatMl(schedule.slotMl)} a day, ${formatMl(total)} in all.`;
}

/** `gives 1.10 mL/s, portions of 0.20 mL and more` */
export function headRateWords(head: Head): string {
  return `Gives ${formatNumber(head.mlPerSecond, 2)} mL/s; portions of ${formatMl(head.smallestMl)} and more are accurate.`;
}
