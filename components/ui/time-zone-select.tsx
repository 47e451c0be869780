import { useMemo } from 'react';
import { timeZoneOptions } from '../../lib/format/time-zones.ts';
import { Select } from './select.tsx';

/** One of the time zones that the browser knows. */
export function TimeZoneSelect({ value, onChange, error }: { value: string; onChange: (timeZone: string) => void; error?: string | null }) {
  const options = useMemo(() => timeZoneOptions(value), [value]);
  return (
    <Select
      label="Time zone of the site"
      hint="Days and times are shown in it"
      value={value}
      onChange={onChange}
      options={options}
      error={error}
    />
  );
}
