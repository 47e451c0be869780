import { useId, useRef, type KeyboardEvent, type ReactNode } from 'react';

export interface TabsProps<Value extends string> {
  name: string;
  value: Value;
  onChange: (value: Value) => void;
  tabs: readonly { value: Value; label: string }[];
  /** The panel of the chosen tab. */
  children: ReactNode;
}

/** Parts of one screen, one at a time. Arrow keys move between the tabs. */
export function Tabs<Value extends string>({ name, value, onChange, tabs, children }: TabsProps<Value>) {
  const id = useId();
  const row = useRef<HTMLDivElement>(null);

  function onKeyDown(event: KeyboardEvent, index: number): void {
    const by = event.key === 'ArrowRight' ? 1 : event.key === 'ArrowLeft' ? -1 : 0;
    if (by === 0) return;
    event.preventDefault();
    const next = (index + by + tabs.length) % tabs.length;
    const tab = tabs[next];
    if (tab === undefined) return;
    onChange(tab.value);
    row.current?.querySelectorAll<HTMLButtonElement>('button')[next]?.focus();
  }

  return (
    <div style={{ display: 'flex', flexDirection: 'column', gap: 16, minWidth: 0 }}>
      <div ref={row} className="segments" role="tablist" aria-label={name}>
        {tabs.map((tab, index) => {
          const chosen = tab.value === value;
          return (
            <button
              key={tab.value}
              id={`${id}-${tab.value}`}
              type="button"
              role="tab"
              aria-selected={chosen}
              aria-controls={chosen ? `${id}-panel` : undefined}
              tabIndex={chosen ? 0 : -1}
              className="segment"
              onClick={() => onChange(tab.value)}
              onKeyDown={(event) => onKeyDown(event, index)}
            >
              {tab.label}
            </button>
          );
        })}
      </div>
      <div id={`${id}-panel`} role="tabpanel" aria-labelledby={`${id}-${value}`} style={{ minWidth: 0 }}>
        {children}
      </div>
    </div>
  );
}
