import { themes, type Scheme } from '../../constants/tokens.ts';

export type ThemeChoice = 'system' | Scheme;

const storageKey = 'steadfall.theme';
const listeners = new Set<() => void>();

function read(): ThemeChoice {
  const stored = localStorage.getItem(storageKey);
  return stored === 'light' || stored === 'dark' ? stored : 'system';
}

let choice: ThemeChoice = read();

const darkQuery = () => window.matchMedia('(prefers-color-scheme: dark)');

/** The scheme that shows now. */
export function currentScheme(): Scheme {
  if (choice !== 'system') return choice;
  return darkQuery().matches ? 'dark' : 'light';
}

export const currentChoice = (): ThemeChoice => choice;

/** Puts the choice on the page; `theme.css` does the rest. Also colours the browser's own bar. */
export function applyTheme(): void {
  if (choice === 'system') delete document.documentElement.dataset['theme'];
  else document.documentElement.dataset['theme'] = choice;
  let bar = document.querySelector<HTMLMetaElement>('meta[name="theme-color"]');
  if (bar === null) {
    bar = document.createElement('meta');
    bar.name = 'theme-color';
    document.head.append(bar);
  }
  bar.content = themes[currentScheme()].ground;
}

function changed(): void {
  applyTheme();
  for (const listener of listeners) listener();
}

export function chooseTheme(next: ThemeChoice): void {
  choice = next;
  localStorage.setItem(storageKey, next);
  changed();
}

export function subscribeToTheme(listener: () => void): () => void {
  if (listeners.size === 0) darkQuery().addEventListener('change', changed);
  listeners.add(listener);
  return () => {
    listeners.delete(listener);
    if (listeners.size === 0) darkQuery().removeEventListener('change', changed);
  };
}
