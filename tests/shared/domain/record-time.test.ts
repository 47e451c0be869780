import { describe, expect, it } from 'vitest';
import { recordTimeProblem } from '#shared/domain/record-time.ts';

const nowMs = Date.parse('2026-03-01T12:00:00Z');

describe('the time of a record', () => {
  it('may be ten minutes ahead and no more', () => {
    expect(recordTimeProblem(nowMs + 600_000, nowMs)).toBeNull();
    expect(recordTimeProblem(nowMs + 600_001, nowMs)).toBe('in-the-future');
  });

  it('may go back to 1990 and no further', () => {
    expect(recordTimeProblem(Date.parse('1990-01-01T00:00:00Z'), nowMs)).toBeNull();
    expect(recordTimeProblem(Date.parse('1989-12-31T23:59:59Z'), nowMs)).toBe('too-early');
  });
});
