import { Link, usePathname, type Href } from 'expo-router';
import { useEffect, useId, useRef, useState } from 'react';
import { Button } from './button.tsx';

/** Links behind a button. Escape and a press beside it close it; the focus goes back to the button. */
export function Menu({ name, items }: { name: string; items: readonly { href: Href; label: string }[] }) {
  /** The address at which it was opened: following a link closes it. */
  const [openAt, setOpenAt] = useState<string | null>(null);
  const id = useId();
  const box = useRef<HTMLDivElement>(null);
  const button = useRef<HTMLButtonElement>(null);
  const path = usePathname();
  const open = openAt === path;

  useEffect(() => {
    if (!open) return undefined;
    const onPress = (event: PointerEvent) => {
      if (event.target instanceof Node && box.current?.contains(event.target) !== true) setOpenAt(null);
    };
    const onKey = (event: KeyboardEvent) => {
      if (event.key !== 'Escape') return;
      setOpenAt(null);
      button.current?.focus();
    };
    document.addEventListener('pointerdown', onPress);
    document.addEventListener('keydown', onKey);
    return () => {
      document.removeEventListener('pointerdown', onPress);
      document.removeEventListener('keydown', onKey);
    };
  }, [open]);

  return (
    <div ref={box} className="menu">
      <Button ref={button} kind="quiet" expanded={open} controls={id} onPress={() => setOpenAt(open ? null : path)}>
        {name}
      </Button>
      {open ? (
        <ul className="menu-list" id={id}>
          {items.map((item) => (
            <li key={item.label}>
              <Link href={item.href} asChild>
                <a className="menu-item" aria-current={path === item.href ? 'page' : undefined}>
                  {item.label}
                </a>
              </Link>
            </li>
          ))}
        </ul>
      ) : null}
    </div>
  );
}
