import type { ThemeTokens } from './tokens.ts';

/**
 * The semantic colours as CSS variables, which `theme.css` sets for both themes: a style that uses them follows the theme
 * without rendering again. A canvas, which knows no variables, takes the values from `useTheme().tokens`.
 */
export const color: Record<keyof ThemeTokens, string> = {
  ground: 'var(--ground)',
  sheet: 'var(--sheet)',
  rule: 'var(--rule)',
  edge: 'var(--edge)',
  ink: 'var(--ink)',
  inkSoft: 'var(--ink-soft)',
  brand: 'var(--brand)',
  dose: 'var(--dose)',
  due: 'var(--due)',
  urgent: 'var(--urgent)',
};
