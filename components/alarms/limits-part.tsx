import { useState } from 'react';
import type { AlarmRule } from '#shared/contract/alarms.ts';
import { isAtLeast, type Role } from '#shared/domain/role.ts';
import { useAlarmRules } from '../../hooks/use-alarms.ts';
import { alarmTitles } from '../../lib/codes/alarm-words.ts';
import { Button } from '../ui/button.tsx';
import { Heading } from '../ui/heading.tsx';
import { Notice } from '../ui/notice.tsx';
import { PriorityBars } from '../ui/priority-bars.tsx';
import { Sheet } from '../ui/sheet.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { LimitEditor } from './limit-editor.tsx';
import { limitMeanings, limitSentence } from './limit-words.ts';

const ruleKey = (rule: AlarmRule) => `${rule.code}/${rule.target}`;

/** The limits of a system with what has been counted against them, and the editor for those who may. */
export function LimitsPart({ systemId, role }: { systemId: string; role: Role }) {
  const rules = useAlarmRules(systemId);
  const [edited, setEdited] = useState<AlarmRule | null>(null);
  if (rules.isError) return <Notice error={rules.error} onRetry={() => void rules.refetch()} />;
  if (rules.data === undefined) return <Skeleton lines={8} name="Loading the limits" />;
  return (
    <div style={{ display: 'flex', flexDirection: 'column', gap: 8 }}>
      <Text soft>
        Over soft an alarm shows here. Over hard every carbon head is stopped, and stays stopped until a keeper finds the cause, resets the
        alarm and resumes. The pump keeps ceilings of its own besides.
      </Text>
      {rules.data.map((rule) => (
        <section key={ruleKey(rule)} className="item" aria-label={alarmTitles[rule.code]}>
          <div className="item-head">
            <Heading level={2} variant="label">
              {alarmTitles[rule.code]}
            </Heading>
            <PriorityBars priority={rule.priority} />
          </div>
          <Text>{limitMeanings[rule.code]}</Text>
          {limitSentence(rule) === null ? null : <Text bold>{limitSentence(rule)}</Text>}
          {isAtLeast(role, 'keeper') ? (
            <div className="row-of-buttons">
              <Button name={`Change: ${alarmTitles[rule.code]}`} onPress={() => setEdited(rule)}>
                Change
              </Button>
            </div>
          ) : null}
        </section>
      ))}
      <Sheet title={edited === null ? 'Limit' : alarmTitles[edited.code]} open={edited !== null} onClose={() => setEdited(null)}>
        {edited === null ? null : (
          <LimitEditor key={ruleKey(edited)} systemId={systemId} rule={edited} isOwner={role === 'owner'} onDone={() => setEdited(null)} />
        )}
      </Sheet>
    </div>
  );
}
