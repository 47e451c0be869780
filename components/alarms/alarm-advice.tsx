import type { Alarm } from '#shared/contract/alarms.ts';
import { firstAdvice } from '#shared/domain/first-advice.ts';
import { adviceSentence } from '../../lib/codes/advice-words.ts';
import { Heading } from '../ui/heading.tsx';

/** What to do first, in order, while the alarm is not over. */
export function AlarmAdvice({ alarm }: { alarm: Alarm }) {
  if (alarm.state === 'normal') return null;
  return (
    <section aria-label="First advice" style={{ display: 'flex', flexDirection: 'column', gap: 8 }}>
      <Heading level={2}>Do this first</Heading>
      <ol className="advice">
        {firstAdvice(alarm.code, alarm.limitKind).map((advice) => (
          <li key={advice.code}>{adviceSentence(advice)}</li>
        ))}
      </ol>
    </section>
  );
}
