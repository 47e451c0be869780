import { useSyncExternalStore } from 'react';
import { themes, type Scheme, type ThemeTokens } from '../constants/tokens.ts';
import { chooseTheme, currentChoice, currentScheme, subscribeToTheme, type ThemeChoice } from '../lib/theme/theme-choice.ts';

export interface Theme {
  choice: ThemeChoice;
  scheme: Scheme;
  /** The values themselves, for a canvas; anything else uses `color`. */
  tokens: ThemeTokens;
  choose: (choice: ThemeChoice) => void;
}

/** The theme that shows, and how to choose another; kept in this browser. */
export function useTheme(): Theme {
  const choice = useSyncExternalStore(subscribeToTheme, currentChoice, currentChoice);
  const scheme = useSyncExternalStore(subscribeToTheme, currentScheme, currentScheme);
  return { choice, scheme, tokens: themes[scheme], choose: chooseTheme };
}
