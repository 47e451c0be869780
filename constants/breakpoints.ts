/** From these widths, in CSS pixels, a screen has two panes, and then three. */
export const breakpoints = { twoPanes: 700, wide: 1000 } as const;

/** The width of the list of systems beside a screen. */
export const roundsPaneWidth = 280;

/** The width of the pane for what is selected. */
export const detailPaneWidth = 380;
