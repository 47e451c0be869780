import { describe, expect, it } from 'vitest';
import { pageFrom, pageOfWhole, pageRequest } from '../../../server/api/page.ts';
import { BadInputError } from '../../../server/errors.ts';

interface Row {
  key: number;
  id: string;
}

const all: Row[] = [
  { key: 3, id: 'c' },
  { key: 2, id: 'b' },
  { key: 2, id: 'a' },
  { key: 1, id: 'z' },
];

/** What a repository does, in memory. */
function read(query: { limit: number; cursor?: string }) {
  const request = pageRequest(query);
  const { after } = request;
  const rest = after === null ? all : all.filter((row) => row.key < after.key || (row.key === after.key && row.id < after.id));
  return pageFrom(
    rest.slice(0, request.limit),
    query,
    (row) => row,
    (row) => row.id,
  );
}

describe('paging', () => {
  it('walks through rows of the same key without losing or repeating one', () => {
    const seen: string[] = [];
    let cursor: string | undefined;
    do {
      const page = read({ limit: 1, cursor });
      seen.push(...page.items);
      cursor = page.next ?? undefined;
    } while (cursor !== undefined);
    expect(seen).toEqual(['c', 'b', 'a', 'z']);
  });

  it('has no next page when the last row is shown', () => {
    expect(read({ limit: 4 }).next).toBeNull();
    expect(read({ limit: 3 }).next).not.toBeNull();
  });

  it.each(['nonsense', '', 'WzEsMl0', Buffer.from('[1e999,"a"]').toString('base64url'), Buffer.from('{}').toString('base64url')])(
    'refuses the cursor %j',
    (cursor) => {
      expect(() => pageRequest({ limit: 10, cursor })).toThrow(BadInputError);
    },
  );
});

describe('a list that was read whole', () => {
  const letters = ['a', 'b', 'c'];

  it('is walked through without losing or repeating one, and ends with the last', () => {
    const first = pageOfWhole(letters, { limit: 2 });
    expect(first.items).toEqual(['a', 'b']);
    expect(pageOfWhole(letters, { limit: 2, cursor: first.next ?? '' })).toEqual({ items: ['c'], next: null });
    expect(pageOfWhole(letters, { limit: 3 })).toEqual({ items: letters, next: null });
    expect(pageOfWhole([], { limit: 1 })).toEqual({ items: [], next: null });
  });

  it.each(['nonsense', '', 'Wy0xXQ', 'WzEuNV0', 'WzEsMl0', 'e30'])('refuses the cursor %j', (cursor) => {
    expect(() => pageOfWhole(letters, { limit: 1, cursor })).toThrow(BadInputError);
  });
});
