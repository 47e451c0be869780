import { themes, type ThemeTokens } from './tokens.ts';

function declarations(tokens: ThemeTokens, indent: string): string {
  return Object.entries(tokens)
    .map(([name, value]) => `${indent}--${name.replace(/[A-Z]/g, (letter) => `-${letter.toLowerCase()}`)}: ${value.toLowerCase()};`)
    .join('\n');
}

/** The text of `theme.css`: both themes as CSS variables, by the reader's setting or by choice (`data-theme`). */
export function renderThemeCss(): string {
  return `/* Made from tokens.ts; a test holds them together. */
:root {
  color-scheme: light;
${declarations(themes.light, '  ')}
}

@media (prefers-color-scheme: dark) {
  :root:not([data-theme='light']) {
    color-scheme: dark;
${declarations(themes.dark, '    ')}
  }
}

:root[data-theme='dark'] {
  color-scheme: dark;
${declarations(themes.dark, '  ')}
}
`;
}
