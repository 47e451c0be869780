import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import {
  orderPayloadSchema,
  receiptPayloadSchema,
  runPayloadSchema,
  schedulePayloadSchema,
  statePayloadSchema,
} from '#shared/mqtt/payloads.ts';
import { resolveSenml } from '#shared/mqtt/senml.ts';
import { downlinks, uplinks } from '#shared/mqtt/topics.ts';

const text = readFileSync('docs/devices.md', 'utf8');
const blocks = [...text.matchAll(/```json\n([\s\S]*?)```/g)].map((match) => match[1] ?? '');

/** A block shows one message over several lines, or several with a line each. */
function examplesIn(block: string): object[] {
  const lines = block.trim().split('\n');
  return lines.every((line) => line.startsWith('{')) && lines.length > 1
    ? lines.map((line): object => JSON.parse(line))
    : [JSON.parse(block)];
}

function schemaOf(example: object) {
  if ('phase' in example) return runPayloadSchema;
  if ('online' in example) return statePayloadSchema;
  if ('version' in example) return schedulePayloadSchema;
  return 'do' in example ? orderPayloadSchema : receiptPayloadSchema;
}

describe('the contract for device makers', () => {
  it('shows examples that the server takes, field for field', () => {
    const objects = blocks.filter((block) => block.startsWith('{')).flatMap(examplesIn);
    expect(objects).toHaveLength(7);
    for (const example of objects) expect(schemaOf(example).parse(example)).toEqual(example);
  });

  it('shows a measurement that resolves', () => {
    const pack: unknown = JSON.parse(blocks.find((block) => block.trimStart().startsWith('[')) ?? '');
    const resolved = resolveSenml(pack, 1_767_225_700);
    expect(resolved).toMatchObject({ isResolved: true });
  });

  it('names every topic', () => {
    for (const word of [...uplinks, ...downlinks]) expect(text).toContain(`| \`${word}\``);
  });
});
