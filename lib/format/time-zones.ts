/** The time zone of this browser, to begin with. */
export const browserTimeZone = (): string => Intl.DateTimeFormat().resolvedOptions().timeZone;

/** Every time zone to choose from, as an IANA name and as people read it; `chosen` is among them, whatever the browser lists. */
export function timeZoneOptions(chosen: string): { value: string; label: string }[] {
  const zones = new Set([...Intl.supportedValuesOf('timeZone'), 'UTC', chosen]);
  return [...zones].sort().map((value) => ({ value, label: value.replaceAll('_', ' ') }));
}
