import { useState } from 'react';
import type { System } from '#shared/contract/systems.ts';
import { useCreateHandDose } from '../../hooks/use-records.ts';
import { useProducts } from '../../hooks/use-sites.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { Button } from '../ui/button.tsx';
import { DecimalField } from '../ui/decimal-field.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { Notice } from '../ui/notice.tsx';
import { Select } from '../ui/select.tsx';
import { Sheet } from '../ui/sheet.tsx';
import { Text } from '../ui/text.tsx';
import { readHandDose, type HandDoseErrors } from './hand-dose-form.ts';

export interface HandDoseSheetProps {
  system: System;
  onClose: () => void;
  /** Written down, or waiting for the network. */
  onDone: (sentence: string) => void;
}

/** A dose that a person gave: a record that counts in every limit, not an order to a pump. */
export function HandDoseSheet({ system, onClose, onDone }: HandDoseSheetProps) {
  const products = useProducts(system.siteId);
  const create = useCreateHandDose(system.id);
  const [chosenId, setChosenId] = useState<string | null>(null);
  const [ml, setMl] = useState('');
  const [at, setAt] = useState('');
  const [errors, setErrors] = useState<HandDoseErrors>({});
  const productId = chosenId ?? (products.data?.length === 1 ? (products.data[0]?.id ?? '') : '');

  function save(): void {
    const read = readHandDose({ productId, ml, at }, system.timeZone, Date.now());
    setErrors(read.ok ? {} : read.errors);
    if (!read.ok) return;
    create.mutate(read.body, {
      onSuccess: (result) =>
        onDone(result.state === 'saved' ? 'The dose is written down.' : 'No network: the dose is kept here and sent when it is back.'),
    });
  }

  return (
    <Sheet title="A dose by hand" open onClose={onClose}>
      {products.data?.length === 0 ? (
        <>
          <Text>Say first what you dose: a product with its label.</Text>
          <LinkText href={`/systems/${system.id}/rig`} block>
            Add a product
          </LinkText>
        </>
      ) : (
        <Form name="A dose by hand" onSubmit={save}>
          {products.isError ? <Notice error={products.error} onRetry={() => void products.refetch()} /> : null}
          <Select
            label="What"
            value={productId}
            onChange={setChosenId}
            options={(products.data ?? []).map((product) => ({ value: product.id, label: product.name }))}
            placeholder="Choose"
            error={errors.productId ?? fieldError(create.error, 'productId')}
          />
          <DecimalField label="How much" unit="mL" text={ml} onChange={setMl} error={errors.ml ?? fieldError(create.error, 'ml')} />
          <Field
            label="When"
            type="datetime-local"
            value={at}
            onChange={setAt}
            hint="Leave it empty for now"
            error={errors.at ?? fieldError(create.error, 'at')}
          />
          {create.isError && !isSaidAtFields(create.error) ? <Notice error={create.error} /> : null}
          <Button kind="primary" submit busy={create.isPending} wide>
            Write it down
          </Button>
        </Form>
      )}
    </Sheet>
  );
}
