import { createHash } from 'node:crypto';

/**
 * Ids of the demo's rows, the same whenever the seed is run again with the same anchor: so an interrupted seed is repeated by
 * the rule that the same id and body is nothing new. A UUID version 7 with the anchor for its time.
 */
export function demoId(anchorMs: number, name: string): string {
  const time = anchorMs.toString(16).padStart(12, '0');
  const random = createHash('sha256').update(`${anchorMs} ${name}`).digest('hex');
  const variant = ((Number.parseInt(random.slice(3, 4), 16) & 0x3) | 0x8).toString(16);
  return `${time.slice(0, 8)}-${time.slice(8)}-7${random.slice(0, 3)}-${variant}${random.slice(4, 7)}-${random.slice(7, 19)}`;
}
