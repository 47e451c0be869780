import type { Run } from '#shared/contract/telemetry.ts';
import type { TapeKind } from '../charts/drop-tape-model.ts';

export const causeWords: Record<Run['cause'], string> = {
  schedule: 'its schedule',
  order: 'an order from here',
  button: 'a button on the pump',
  prime: 'priming',
  calibration: 'calibration',
};

/** What a mark means for who has to decide, where the word alone does not say it. */
export function portionAdvice(kind: TapeKind): string | null {
  switch (kind) {
    case 'unheard':
      return 'The pump is away. It keeps its own schedule, so this portion is neither given nor missed until it reports.';
    case 'missed':
      return 'The pump was there and did not give it. What was missed is never made up.';
    case 'held':
      return 'Held on purpose: the head was stopped, or a ceiling of the pump refused it.';
    case 'interlocked':
      return 'An alarm stopped the head. It stays stopped until a person resets the alarm and resumes.';
    case 'partial':
      return 'The pump ended early. Look at its line and its bottle.';
    case 'unplanned':
      return 'No slot planned this. Find out who or what started the pump.';
    case 'planned':
    case 'running':
    case 'delivered':
    case 'hand':
      return null;
  }
}
