import { useState } from 'react';
import { useReset } from '../../hooks/use-alarms.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { Button } from '../ui/button.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { Text } from '../ui/text.tsx';

/** Releases the latch with the cause that was found. Dosing is resumed apart. */
export function ResetForm({ alarmId, onDone }: { alarmId: string; onDone: () => void }) {
  const reset = useReset(alarmId);
  const [cause, setCause] = useState('');
  return (
    <Form name="Reset" onSubmit={() => reset.mutate({ cause }, { onSuccess: onDone })}>
      <Text>Reset only when you know what happened. It starts nothing: resume dosing afterwards, when water and animals are well.</Text>
      <Field
        label="What was the cause?"
        value={cause}
        onChange={setCause}
        lines={3}
        maxLength={500}
        required
        error={fieldError(reset.error, 'cause')}
      />
      {reset.isError && !isSaidAtFields(reset.error) ? <Notice error={reset.error} /> : null}
      <div className="row-of-buttons">
        <Button kind="primary" submit busy={reset.isPending}>
          Reset the alarm
        </Button>
        <Button onPress={onDone}>Cancel</Button>
      </div>
    </Form>
  );
}
