import type { Quantity } from '#shared/contract/telemetry.ts';
import { decimalsFor, formatNumber } from './number.ts';

/** What each measured quantity is called, how it is written, and how many decimals its instrument can know. */
const quantityFormats: Record<Quantity, { name: string; unit: string; decimals: number }> = {
  temperature: { name: 'Temperature', unit: '\u00b0C', decimals: 1 },
  ph: { name: 'pH', unit: '', decimals: 2 },
  orp: { name: 'ORP', unit: 'mV', decimals: 0 },
  conductivity: { name: 'Conductivity', unit: 'mS/cm', decimals: 1 },
  'oxygen-percent': { name: 'Oxygen saturation', unit: '%', decimals: 0 },
  oxygen: { name: 'Oxygen', unit: 'mg/L', decimals: 1 },
  level: { name: 'Level', unit: 'mL', decimals: 0 },
  power: { name: 'Power', unit: 'W', decimals: 0 },
  flow: { name: 'Flow', unit: 'L/min', decimals: 1 },
};

interface Measured {
  quantity: Quantity | null;
  unit: string;
  name?: string | null;
  channel?: string;
}

/** The name that a person gave, else what it measures, else the channel's own name. */
export function seriesName(series: Measured): string {
  if (series.name) return series.name;
  if (series.quantity !== null) return quantityFormats[series.quantity].name;
  return series.channel ?? 'Unnamed series';
}

/**
 * The name among the series of a system: where others measure the same quantity, the channel tells them apart, `Power, skimmer`
 * for `power-skimmer`. A name that a person gave stands alone.
 */
export function seriesNameAmong(series: Measured, all: readonly Measured[]): string {
  const name = seriesName(series);
  const { quantity } = series;
  if (series.name || quantity === null || all.filter((other) => other.quantity === quantity).length < 2) return name;
  const second = (series.channel ?? '')
    .split(/[^\p{L}\p{N}]+/u)
    .filter((word) => word !== '' && !quantity.split('-').includes(word.toLowerCase()));
  return second.length === 0 ? name : `${name}, ${second.join(' ')}`;
}

/** The unit as people write it; a series whose quantity is unknown keeps the unit that the device sent. */
export function seriesUnit(series: Measured): string {
  if (series.quantity === null || series.quantity === 'flow') return series.unit;
  return quantityFormats[series.quantity].unit;
}

/** `25.2 °C`, `8.21` */
export function formatSeriesValue(series: Measured, value: number | null): string {
  const decimals = series.quantity === null ? decimalsFor(value ?? 0) : quantityFormats[series.quantity].decimals;
  const figure = formatNumber(value, decimals);
  const unit = seriesUnit(series);
  return value === null || unit === '' ? figure : `${figure} ${unit}`;
}
