import { useState } from 'react';
import { type Quantity, quantities, type Series } from '#shared/contract/telemetry.ts';
import { useNow } from '../../hooks/use-now.ts';
import { useUpdateSeries } from '../../hooks/use-rig.ts';
import { useSeries } from '../../hooks/use-telemetry.ts';
import { formatSeriesValue, seriesName } from '../../lib/format/series-value.ts';
import { formatAgo } from '../../lib/format/time.ts';
import { Button } from '../ui/button.tsx';
import { EmptyState } from '../ui/empty-state.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { Notice } from '../ui/notice.tsx';
import { Select } from '../ui/select.tsx';
import { Sheet } from '../ui/sheet.tsx';
import { Text } from '../ui/text.tsx';
import { RigPart, type RigPartProps } from './rig-part.tsx';

/** Every series that a device sends, with its newest value; a keeper names it and says what it measures. */
export function ProbesPart({ system, mayChange }: RigPartProps) {
  const series = useSeries(system.id);
  const nowMs = useNow();
  const [edited, setEdited] = useState<Series | null>(null);
  return (
    <RigPart title="Series">
      {series.isError ? <Notice error={series.error} onRetry={() => void series.refetch()} /> : null}
      {series.data?.length === 0 ? (
        <EmptyState sentence="Nothing measured yet. A series appears with the first value that a device sends." />
      ) : null}
      {series.data?.map((one) => (
        <div key={one.id} className="item">
          <div className="item-head">
            <Text bold>{seriesName(one)}</Text>
            <Text figures>{formatSeriesValue(one, one.lastValue)}</Text>
          </div>
          <Text soft>
            {`Channel ${one.channel}, ${one.lastT === null ? 'no value yet' : formatAgo(one.lastT, system.timeZone, nowMs)}${one.quantity === null ? '; not said what it measures' : ''}.`}
          </Text>
          {one.conflicts > 0 ? <Text soft>{`${one.conflicts} values came twice and differed; the first of each was kept.`}</Text> : null}
          {mayChange ? (
            <div className="row-of-buttons">
              <Button kind="quiet" name={`Name ${seriesName(one)}, channel ${one.channel}`} onPress={() => setEdited(one)}>
                Name or quantity
              </Button>
            </div>
          ) : null}
        </div>
      ))}
      <Sheet title="Series" open={edited !== null} onClose={() => setEdited(null)}>
        {edited === null ? null : <SeriesForm key={edited.id} systemId={system.id} series={edited} onDone={() => setEdited(null)} />}
      </Sheet>
    </RigPart>
  );
}

const unknown = 'unknown';

function SeriesForm({ systemId, series, onDone }: { systemId: string; series: Series; onDone: () => void }) {
  const update = useUpdateSeries(systemId);
  const [name, setName] = useState(series.name ?? '');
  const [quantity, setQuantity] = useState<Quantity | typeof unknown>(series.quantity ?? unknown);
  const named = (value: Quantity) => ({ value, label: seriesName({ quantity: value, unit: '' }) });
  function save(): void {
    const body = { name: name.trim() === '' ? null : name, quantity: quantity === unknown ? null : quantity };
    update.mutate({ seriesId: series.id, body }, { onSuccess: onDone });
  }
  return (
    <Form name="Series" onSubmit={save}>
      <Text soft>{`Channel ${series.channel}`}</Text>
      <Field label="Name" value={name} onChange={setName} maxLength={80} hint="Empty: named after what it measures." />
      <Select
        label="Measures"
        value={quantity}
        onChange={setQuantity}
        options={[{ value: unknown, label: 'Not said' }, ...quantities.map(named)]}
      />
      {update.isError ? <Notice error={update.error} /> : null}
      <Button kind="primary" submit busy={update.isPending}>
        Save
      </Button>
    </Form>
  );
}
