import { quantitySchema, type Series } from '#shared/contract/telemetry.ts';
import type { Row } from '../db/schema.ts';

/** A series in its REST shape. */
export function presentSeries(row: Row<'series'>): Series {
  return {
    id: row.id,
    systemId: row.systemId,
    deviceId: row.deviceId,
    channel: row.channel,
    name: row.name,
    quantity: row.quantity === null ? null : quantitySchema.parse(row.quantity),
    unit: row.unit,
    lastT: row.lastMs,
    lastValue: row.lastValue,
    conflicts: row.conflicts,
  };
}
