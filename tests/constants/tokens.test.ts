import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { renderThemeCss } from '../../constants/render-theme-css.ts';
import { themes, type Scheme, type ThemeTokens } from '../../constants/tokens.ts';
import { contrast, distance, seenBy, type Deficiency } from '../helpers/colour.ts';

const schemes: Scheme[] = ['light', 'dark'];
const grounds: (keyof ThemeTokens)[] = ['ground', 'sheet'];

describe.each(schemes)('the %s theme', (scheme) => {
  const tokens = themes[scheme];

  it.each(grounds.flatMap((ground) => (['ink', 'inkSoft'] as const).map((text) => [text, ground] as const)))(
    'sets %s on %s with at least 4.5:1',
    (text, ground) => {
      expect(contrast(tokens[text], tokens[ground])).toBeGreaterThanOrEqual(4.5);
    },
  );

  it.each(grounds.flatMap((ground) => (['edge', 'dose', 'due', 'urgent', 'brand', 'ink'] as const).map((mark) => [mark, ground] as const)))(
    'draws %s on %s with at least 3:1',
    (mark, ground) => {
      expect(contrast(tokens[mark], tokens[ground])).toBeGreaterThanOrEqual(3);
    },
  );

  it.each(['brand', 'urgent', 'ink'] as const)('sets ground text on a fill of %s with at least 4.5:1', (fill) => {
    expect(contrast(tokens.ground, tokens[fill])).toBeGreaterThanOrEqual(4.5);
  });

  const deficiencies: Deficiency[] = ['none', 'protan', 'deutan', 'tritan'];
  it.each(deficiencies)('keeps dose, due and urgent apart for %s vision', (deficiency) => {
    const [dose, due, urgent] = [tokens.dose, tokens.due, tokens.urgent].map((hex) => seenBy(deficiency, hex));
    for (const [a, b] of [
      [dose, due],
      [dose, urgent],
      [due, urgent],
    ]) {
      expect(distance(a ?? [], b ?? [])).toBeGreaterThanOrEqual(15);
    }
  });
});

describe('theme.css', () => {
  it('holds exactly what the tokens say', () => {
    expect(readFileSync('constants/theme.css', 'utf8')).toBe(renderThemeCss());
  });
});
