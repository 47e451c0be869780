import type { Device } from '#shared/contract/devices.ts';
import { formatAgo, formatNear } from '../../lib/format/time.ts';
import type { StateMark } from '../ui/state-word.tsx';

export const deviceKindNames: Record<Device['kind'], string> = { pump: 'Pump', probe: 'Probes', other: 'Other' };

/** Whether a device is heard, in words and with the mark beside them. */
export function heardWords(device: Device, timeZone: string, nowMs: number): { mark: StateMark; words: string } {
  const { state } = device;
  if (state === null || state.heardAt === null) return { mark: 'unknown', words: 'not heard yet' };
  if (state.online) return { mark: 'fine', words: `heard ${formatAgo(state.heardAt, timeZone, nowMs)}` };
  return { mark: 'unknown', words: `not heard since ${formatNear(state.changedAt ?? state.heardAt, timeZone, nowMs)}` };
}

/** Whether the pump proves that it runs the schedule that was published for it; null where none was. */
export function scheduleWords(device: Device): string | null {
  if (device.publishedScheduleVersion === null) return null;
  if (device.state?.scheduleVersion === device.publishedScheduleVersion) return 'The pump runs this schedule.';
  return 'Not yet on the pump: it has not confirmed the newest schedule.';
}

/** What is wrong with its clock; null when nothing is known to be. */
export function clockWords(device: Device): string | null {
  const { state } = device;
  if (state === null) return null;
  if (state.clockUnset)
    return 'Its clock is not set: what it reports takes its time of arrival, and it refuses to dose or resume on order.';
  if (state.clockOffsetSeconds !== null && Math.abs(state.clockOffsetSeconds) > 120) {
    const minutes = Math.round(Math.abs(state.clockOffsetSeconds) / 60);
    return `Its clock is ${minutes} min ${state.clockOffsetSeconds > 0 ? 'ahead' : 'behind'}: its portions take their time of arrival.`;
  }
  return null;
}
