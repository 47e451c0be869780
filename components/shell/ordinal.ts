/** `1st`, `2nd`, `3rd`, `4th`, `11th` */
export function ordinal(count: number): string {
  const lastTwo = count % 100;
  if (lastTwo >= 11 && lastTwo <= 13) return `${count}th`;
  const endings: Record<number, string> = { 1: 'st', 2: 'nd', 3: 'rd' };
  return `${count}${endings[count % 10] ?? 'th'}`;
}
