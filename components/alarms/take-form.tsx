import { useState } from 'react';
import { useTake } from '../../hooks/use-alarms.ts';
import { Button } from '../ui/button.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { RadioGroup } from '../ui/radio-group.tsx';

const arrivals = [
  { value: '0', label: 'I am there now' },
  { value: '15', label: 'In 15 minutes' },
  { value: '30', label: 'In half an hour' },
  { value: '60', label: 'In an hour' },
  { value: '120', label: 'In two hours' },
] as const;

/** Says to everybody who looks after the system that somebody is on the way, and when they will be there. */
export function TakeForm({ alarmId, onDone }: { alarmId: string; onDone: () => void }) {
  const take = useTake(alarmId);
  const [minutes, setMinutes] = useState<(typeof arrivals)[number]['value']>('0');
  function send(): void {
    take.mutate({ arriveAt: new Date(Date.now() + Number(minutes) * 60_000).toISOString() }, { onSuccess: onDone });
  }
  return (
    <Form name="I am on it" onSubmit={send}>
      <RadioGroup legend="When are you at the system?" value={minutes} onChange={setMinutes} options={arrivals} />
      {take.isError ? <Notice error={take.error} /> : null}
      <div className="row-of-buttons">
        <Button kind="primary" submit busy={take.isPending}>
          Tell the others
        </Button>
        <Button onPress={onDone}>Cancel</Button>
      </div>
    </Form>
  );
}
