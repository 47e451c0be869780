import type { AlarmState } from '#shared/domain/alarm-life-cycle.ts';
import type { Priority } from '#shared/contract/systems.ts';
import type { AlarmCode } from '#shared/domain/alarm-codes.ts';

/** What each alarm is called on a screen. */
export const alarmTitles: Record<AlarmCode, string> = {
  'volume-hour': 'Too much carbon in an hour',
  'volume-day': 'Too much carbon in a day',
  'volume-week': 'Too much carbon in a week',
  'run-too-long': 'A portion runs too long',
  'device-offline': 'A device is not heard',
};

export const priorityWords: Record<Priority, string> = { low: 'low', medium: 'medium', high: 'high', urgent: 'urgent' };

/** How many bars stand beside the word: urgent shares three with high, and is told by its filled block. */
export const priorityBars: Record<Priority, 1 | 2 | 3> = { low: 1, medium: 2, high: 3, urgent: 3 };

/** The state as a person reads it; the standard's own word stands in the details. `until` is a time already in words. */
export function alarmStateSentence(state: AlarmState, until: string | null): string {
  switch (state) {
    case 'unacknowledged':
      return 'Nobody has seen this yet';
    case 'acknowledged':
      return 'Seen; still going on';
    case 'returned':
      return 'Over, but nobody has seen it';
    case 'latched':
      return 'Over; still stopped until a person resets it';
    case 'shelved':
      return until === null ? 'Quiet for now' : `Quiet until ${until}`;
    case 'suppressed':
      return 'Kept quiet by other work';
    case 'out-of-service':
      return 'Switched off';
    case 'normal':
      return 'Over';
  }
}
