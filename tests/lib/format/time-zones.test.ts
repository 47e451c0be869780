import { describe, expect, it } from 'vitest';
import { browserTimeZone, timeZoneOptions } from '../../../lib/format/time-zones.ts';

describe('time zones to choose from', () => {
  it('hold the chosen one and UTC once, also when the browser does not list them', () => {
    const values = timeZoneOptions('Etc/GMT-14').map(({ value }) => value);
    expect(values.filter((value) => value === 'Etc/GMT-14')).toHaveLength(1);
    expect(values.filter((value) => value === 'UTC')).toHaveLength(1);
    expect(values).toContain('Europe/Lisbon');
  });

  it('read as people write them', () => {
    expect(timeZoneOptions('UTC').find(({ value }) => value === 'America/New_York')?.label).toBe('America/New York');
  });

  it("begin with the browser's own", () => {
    expect(timeZoneOptions(browserTimeZone()).map(({ value }) => value)).toContain(browserTimeZone());
  });
});
