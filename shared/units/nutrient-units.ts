/** Units in which test kits print their results. */
export const testUnits = [
  'mg/L NO3',
  'mg/L NO3-N',
  'mg/L PO4',
  'mg/L PO4-P',
  'ug/L PO4',
  'ug/L PO4-P',
  'mg/L NH4',
  'mg/L NH3-N',
  'mg/L NO2',
  'mg/L NO2-N',
  'dKH',
  'mg/L CaCO3',
  'meq/L',
] as const;
export type TestUnit = (typeof testUnits)[number];
