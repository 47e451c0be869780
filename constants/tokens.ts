/** What a colour is for. The same keys in both themes; components use `color` (CSS variables) and canvases these values. */
export interface ThemeTokens {
  /** The page. */
  ground: string;
  /** Raised sheets and tables. */
  sheet: string;
  /** Hairlines, decorative only. */
  rule: string;
  /** Field borders and band edges, at least 3:1. */
  edge: string;
  /** Text, and the marks of nutrients. */
  ink: string;
  /** Secondary text, at least 4.5:1. */
  inkSoft: string;
  /** Wordmark, fill of the main button, fill of a band; never a state. */
  brand: string;
  /** Deliveries and the staircase. */
  dose: string;
  /** Due work and soft limits. */
  due: string;
  /** A filled block with `ground` text, used for nothing else. */
  urgent: string;
}

export type Scheme = 'light' | 'dark';

const paper: ThemeTokens = {
  ground: '#F7F3EA',
  sheet: '#FFFDF8',
  rule: '#D9D1C0',
  edge: '#8C8371',
  ink: '#1E2A2E',
  inkSoft: '#55625F',
  brand: '#1F6B5C',
  dose: '#1F5FD0',
  due: '#986000',
  urgent: '#850A24',
};

const night: ThemeTokens = {
  ground: '#12181A',
  sheet: '#1A2225',
  rule: '#33403F',
  edge: '#71807D',
  ink: '#ECE7DB',
  inkSoft: '#A9B5AF',
  brand: '#6CC5AE',
  dose: '#6FA3F0',
  due: '#F2B441',
  urgent: '#FF5277',
};

export const themes: Record<Scheme, ThemeTokens> = { light: paper, dark: night };
