import { useTheme } from '../../hooks/use-theme.ts';
import { RadioGroup } from '../ui/radio-group.tsx';

export function ThemePicker() {
  const { choice, choose } = useTheme();
  return (
    <RadioGroup
      legend="Theme, in this browser"
      value={choice}
      onChange={choose}
      options={[
        { value: 'system', label: "The device's own" },
        { value: 'light', label: 'Paper' },
        { value: 'dark', label: 'Night' },
      ]}
    />
  );
}
