import * as fc from 'fast-check';
import { expect, it } from 'vitest';
import { createFrameScanner } from '../../broker/frame-scanner.ts';
import { connectFrame, publishFrame } from '../helpers/raw-mqtt.ts';

/** Runs a stream through the scanner in pieces, and gives what is passed on with the types of the frames. */
function scan(pieces: Buffer[]): { passed: Buffer; types: number[] } {
  const scanner = createFrameScanner(1_024);
  const passed: Buffer[] = [];
  const types: number[] = [];
  for (const piece of pieces) {
    let at = 0;
    while (at < piece.length) {
      if (scanner.isInBody()) {
        const { bytes, offset } = scanner.body(piece, at);
        passed.push(bytes);
        at = offset;
      } else {
        const { head, offset } = scanner.head(piece, at);
        if (head !== null) {
          passed.push(head.bytes);
          types.push(head.type);
        }
        at = offset;
      }
    }
  }
  return { passed: Buffer.concat(passed), types };
}

function cut(stream: Buffer, cuts: number[]): Buffer[] {
  const at = [...new Set(cuts.map((position) => position % stream.length))].sort((one, other) => one - other);
  return [0, ...at].map((from, index) => stream.subarray(from, at[index] ?? stream.length));
}

const connect = connectFrame({ clientId: 'd', username: 'd', password: 'p' });

it('passes frames on as they are, however the stream is cut', () => {
  fc.assert(
    fc.property(fc.array(fc.nat(3_000), { maxLength: 8 }), fc.array(fc.nat(), { maxLength: 30 }), (sizes, cuts) => {
      const frames = sizes.map((bytes, index) =>
        publishFrame('steadfall/d/senml', Buffer.alloc(bytes, index), index + 1, { qos: index % 3 }),
      );
      const stream = Buffer.concat([connect, ...frames]);
      const { passed, types } = scan(cut(stream, cuts));
      expect(passed.equals(stream)).toBe(true);
      expect(types).toEqual([1, ...frames.map(() => 3)]);
    }),
    { numRuns: 200 },
  );
});

it('cuts a payload that is too long to the same bytes, however the stream is cut', () => {
  fc.assert(
    fc.property(
      fc.integer({ min: 65_537, max: 300_000 }),
      fc.constantFrom(0, 1, 2),
      fc.array(fc.nat(), { maxLength: 30 }),
      (bytes, qos, cuts) => {
        const long = publishFrame('steadfall/d/senml', Buffer.alloc(bytes, 'a'), 5, { qos });
        const after = publishFrame('steadfall/d/run', '{}', 6);
        const short = publishFrame('steadfall/d/senml', Buffer.alloc(65_537, 'a'), 5, { qos });
        expect(scan(cut(Buffer.concat([connect, long, after]), cuts)).passed.equals(Buffer.concat([connect, short, after]))).toBe(true);
      },
    ),
    { numRuns: 50 },
  );
});
