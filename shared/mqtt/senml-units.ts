import type { Quantity } from '../contract/telemetry.ts';

/** How the values of a channel are kept: `kept = value * scale + offset`, in `unit`. */
export interface KeptAs {
  /** Null while nobody knows what is measured. */
  quantity: Quantity | null;
  unit: string;
  scale: number;
  offset: number;
}

const kept = (quantity: Quantity | null, unit: string, scale = 1, offset = 0): KeptAs => ({ quantity, unit, scale, offset });

/** Units that tell by themselves what is measured. Registered ones are of RFC 8428, section 12.1; `mS/cm` is ours. */
const plainUnits = new Map<string, KeptAs>([
  ['Cel', kept('temperature', 'degC')],
  ['K', kept('temperature', 'degC', 1, -273.15)],
  ['pH', kept('ph', 'pH')],
  ['S/m', kept('conductivity', 'mS/cm', 10)],
  ['mS/cm', kept('conductivity', 'mS/cm')],
  ['W', kept('power', 'W')],
]);

/**
 * Units that tell it together with the first word of the channel. `/` and `%` are both the ratio itself (RFC 8428,
 * section 12.1: 0.95, not 95); percent is `/100` (RFC 8798). `mg/l` and `ml` are ours.
 */
const unitsByWord = new Map<string, Map<string, KeptAs>>([
  [
    'orp',
    new Map([
      ['V', kept('orp', 'mV', 1000)],
      ['mV', kept('orp', 'mV')],
    ]),
  ],
  [
    'oxygen',
    new Map([
      ['/100', kept('oxygen-percent', '%')],
      ['/', kept('oxygen-percent', '%', 100)],
      ['%', kept('oxygen-percent', '%', 100)],
      ['kg/m3', kept('oxygen', 'mg/L', 1000)],
      ['mg/l', kept('oxygen', 'mg/L')],
    ]),
  ],
  [
    'level',
    new Map([
      ['l', kept('level', 'mL', 1000)],
      ['m3', kept('level', 'mL', 1_000_000)],
      ['ml', kept('level', 'mL')],
    ]),
  ],
  [
    'flow',
    new Map([
      ['m3/s', kept('flow', 'm3/s')],
      ['l/s', kept('flow', 'l/s')],
    ]),
  ],
]);

const quantityOfWord = new Map<string, Quantity>([
  ['orp', 'orp'],
  ['oxygen', 'oxygen'],
  ['level', 'level'],
  ['flow', 'flow'],
  ['power', 'power'],
]);

/** The first word of a channel, in lower case: `orp` of `ORP/sump`. */
function firstWord(channel: string): string {
  return (channel.split(/[:./_-]/, 1)[0] ?? '').toLowerCase();
}

/**
 * Tells the quantity of a channel, by the unit where that is plain, else by the channel's first word, and the unit that
 * its values are kept in: a unit that is not known for the quantity is kept as it is.
 *
 * @example keptAs('V', 'orp') // mV, scale 1000
 * @example keptAs('V', 'battery') // unknown quantity, V
 */
export function keptAs(unit: string | null, channel: string): KeptAs {
  const sent = unit ?? '';
  const plain = plainUnits.get(sent);
  if (plain !== undefined) return plain;
  const word = firstWord(channel);
  const known = unitsByWord.get(word)?.get(sent);
  if (known !== undefined) return known;
  return kept(quantityOfWord.get(word) ?? null, sent);
}

/** A value in the unit that it is kept in, without the noise that a conversion leaves behind the twelfth digit. */
export function toKept(value: number, as: KeptAs): number {
  if (as.scale === 1 && as.offset === 0) return value;
  return Number((value * as.scale + as.offset).toPrecision(12));
}
