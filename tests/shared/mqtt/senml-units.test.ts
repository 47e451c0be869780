import { describe, expect, it } from 'vitest';
import { keptAs, toKept } from '#shared/mqtt/senml-units.ts';

describe('units of SenML', () => {
  it.each([
    ['Cel', 'water', 25.1, 'temperature', 'degC', 25.1],
    ['K', 'water', 298.25, 'temperature', 'degC', 25.1],
    ['pH', 'probe1', 8.1, 'ph', 'pH', 8.1],
    ['V', 'orp', 0.41, 'orp', 'mV', 410],
    ['mV', 'ORP/sump', 410, 'orp', 'mV', 410],
    ['S/m', 'salt', 5.3065, 'conductivity', 'mS/cm', 53.065],
    ['mS/cm', 'salt', 53.065, 'conductivity', 'mS/cm', 53.065],
    ['/100', 'oxygen', 95, 'oxygen-percent', '%', 95],
    ['/', 'oxygen', 0.95, 'oxygen-percent', '%', 95],
    ['%', 'oxygen', 0.95, 'oxygen-percent', '%', 95],
    ['kg/m3', 'oxygen', 0.006772, 'oxygen', 'mg/L', 6.772],
    ['mg/l', 'oxygen', 6.772, 'oxygen', 'mg/L', 6.772],
    ['l', 'level:bottle', 1.25, 'level', 'mL', 1250],
    ['m3', 'level', 0.00125, 'level', 'mL', 1250],
    ['ml', 'level', 1250, 'level', 'mL', 1250],
    ['W', 'power.skimmer', 12, 'power', 'W', 12],
    ['l/s', 'flow', 0.4, 'flow', 'l/s', 0.4],
    ['m3/s', 'flow', 0.0004, 'flow', 'm3/s', 0.0004],
  ])('keeps %s of %s', (unit, channel, sent, quantity, keptUnit, kept) => {
    const as = keptAs(unit, channel);
    expect([as.quantity, as.unit, toKept(sent, as)]).toEqual([quantity, keptUnit, kept]);
  });

  it('leaves a unit alone that does not tell what is measured, and says that it does not know', () => {
    expect(keptAs('V', 'battery')).toMatchObject({ quantity: null, unit: 'V', scale: 1 });
    expect(keptAs('%', 'humidity')).toMatchObject({ quantity: null, unit: '%', scale: 1 });
    expect(keptAs(null, 'colour')).toMatchObject({ quantity: null, unit: '' });
  });
});
