/** Font stacks. The fallback between is metric-adjusted in `theme.css`, so that nothing moves when a font arrives. */
export const fontFamilies = {
  text: 'Atkinson Hyperlegible Next',
  display: 'Bricolage Grotesque',
  figures: 'Atkinson Hyperlegible Mono',
} as const;

export const fonts = {
  text: `"${fontFamilies.text}", "Text Fallback", system-ui, sans-serif`,
  display: `"${fontFamilies.display}", "Display Fallback", system-ui, sans-serif`,
  figures: `"${fontFamilies.figures}", "Figures Fallback", ui-monospace, monospace`,
} as const;
