import { scaleLinear } from 'd3-scale';

export interface ValueTick {
  readonly value: number;
  readonly label: string;
  readonly y: number;
}

export interface ValueAxis {
  readonly low: number;
  readonly high: number;
  readonly ticks: readonly ValueTick[];
  readonly toY: (value: number) => number;
}

export interface ValueAxisInput {
  readonly values: readonly number[];
  /** Amounts begin at 0, so that twice as tall is twice as much; readings take the room they need. */
  readonly fromZero: boolean;
  /** The least room between low and high, so that a probe's noise does not fill the lane. */
  readonly leastSpan: number;
  readonly topPx: number;
  readonly heightPx: number;
  readonly tickCount: number;
}

function extent(values: readonly number[]): [number, number] {
  const finite = values.filter(Number.isFinite);
  if (finite.length === 0) return [0, 1];
  return [finite.reduce((a, b) => Math.min(a, b)), finite.reduce((a, b) => Math.max(a, b))];
}

/** Round values with as many decimals as their distance needs, and the scale that they stand on. */
export function valueAxis(input: ValueAxisInput): ValueAxis {
  const [least, most] = extent(input.values);
  const lacking = Math.max(0, input.leastSpan - (most - least));
  const low = input.fromZero ? Math.min(0, least) : least - lacking / 2;
  const high = input.fromZero ? Math.max(most, low + input.leastSpan) : most + lacking / 2;
  const scale = scaleLinear()
    .domain([low, high === low ? low + 1 : high])
    .nice(input.tickCount)
    .range([input.topPx + input.heightPx, input.topPx]);
  const [niceLow = low, niceHigh = high] = scale.domain();
  const format = scale.tickFormat(input.tickCount);
  const ticks = scale.ticks(input.tickCount).map((value) => ({ value, label: format(value), y: scale(value) }));
  return { low: niceLow, high: niceHigh, ticks, toY: (value) => scale(value) };
}
