/** From the least to the most pressing. */
export const priorities = ['low', 'medium', 'high', 'urgent'] as const;
export type Priority = (typeof priorities)[number];

/** Below 0 when `a` presses less than `b`, above 0 when more: sorts from least to most. */
export function comparePriority(a: Priority, b: Priority): number {
  return priorities.indexOf(a) - priorities.indexOf(b);
}
