import { useRef, type KeyboardEvent } from 'react';

export interface SegmentedControlProps<Value extends string> {
  /** What is chosen here. */
  name: string;
  value: Value;
  onChange: (value: Value) => void;
  options: readonly { value: Value; label: string }[];
}

/** One of a few in a row that scrolls when it must. One stop for Tab; arrow keys move and choose. */
export function SegmentedControl<Value extends string>({ name, value, onChange, options }: SegmentedControlProps<Value>) {
  const row = useRef<HTMLDivElement>(null);

  function moveTo(index: number): void {
    const option = options[(index + options.length) % options.length];
    if (option === undefined) return;
    onChange(option.value);
    row.current?.querySelectorAll<HTMLButtonElement>('button')[(index + options.length) % options.length]?.focus();
  }

  function onKeyDown(event: KeyboardEvent, index: number): void {
    const steps: Record<string, number> = {
      ArrowRight: index + 1,
      ArrowDown: index + 1,
      ArrowLeft: index - 1,
      ArrowUp: index - 1,
      Home: 0,
      End: options.length - 1,
    };
    const next = steps[event.key];
    if (next === undefined) return;
    event.preventDefault();
    moveTo(next);
  }

  const hasChosen = options.some((option) => option.value === value);
  return (
    <div ref={row} className="segments" role="radiogroup" aria-label={name}>
      {options.map((option, index) => {
        const chosen = option.value === value;
        return (
          <button
            key={option.value}
            type="button"
            role="radio"
            aria-checked={chosen}
            tabIndex={chosen || (!hasChosen && index === 0) ? 0 : -1}
            className="segment"
            onClick={() => onChange(option.value)}
            onKeyDown={(event) => onKeyDown(event, index)}
          >
            {option.label}
          </button>
        );
      })}
    </div>
  );
}
