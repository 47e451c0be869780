import type { Alarm } from '#shared/contract/alarms.ts';
import type { SystemStatus } from '#shared/contract/systems.ts';
import { firstAdvice } from '#shared/domain/first-advice.ts';
import { adviceSentence, isStopProved } from '../../lib/codes/advice-words.ts';
import { Heading } from '../ui/heading.tsx';

/** What to do first, in order, while the alarm is not over. */
export function AlarmAdvice({ alarm, status }: { alarm: Alarm; status: SystemStatus }) {
  if (alarm.state === 'normal') return null;
  const advices = firstAdvice(alarm.code, alarm.limitKind).filter(({ code }) => code !== 'stop-in-app' || !isStopProved(status));
  return (
    <section aria-label="First advice" style={{ display: 'flex', flexDirection: 'column', gap: 8 }}>
      <Heading level={2}>Do this first</Heading>
      <ol className="advice">
        {advices.map((advice) => (
          <li key={advice.code}>{adviceSentence(advice)}</li>
        ))}
      </ol>
    </section>
  );
}
