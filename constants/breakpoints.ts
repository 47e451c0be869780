/** From these widths, in CSS pixels, a screen has two panes, and then three. */
export const breakpoints = { twoPanes: 700, wide: 1000 } as const;
