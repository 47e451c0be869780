/** The largest payload that is taken whole, and what may be in a message around it (topic, message id). */
export const MAX_PAYLOAD_BYTES = 65_536;
const MAX_ENVELOPE_BYTES = 2_048;

/** Control packet types of MQTT 3.1.1, section 2.2.1. */
const CONNECT = 1;
export const PUBLISH = 3;

/** A frame that no device would send; the connection is to be cut. */
export class FrameError extends Error {}

/** A frame whose length is known and whose body has not been passed on. */
export interface FrameHead {
  readonly type: number;
  /** What is passed on in place of the fixed header that came. */
  readonly bytes: Buffer;
}

/** Encodes a remaining length (MQTT 3.1.1, section 2.2.3). */
function encodeLength(length: number): number[] {
  const bytes: number[] = [];
  let rest = length;
  do {
    const digit = rest % 128;
    rest = Math.floor(rest / 128);
    bytes.push(rest > 0 ? digit + 128 : digit);
  } while (rest > 0);
  return bytes;
}

/**
 * Splits a byte stream into frames without holding any: it keeps at most one header, however the stream is cut.
 * A payload over {@link MAX_PAYLOAD_BYTES} is passed on cut to one byte more than that, and the rest is thrown away as
 * it comes: the receiver sees that it is too big and can acknowledge it, and nobody has to hold it.
 */
export function createFrameScanner(maxConnectBytes: number) {
  let header: number[] = [];
  let forward = 0;
  let discard = 0;
  let isFirst = true;

  /** Reads the header that is complete now, or null while bytes are missing. */
  function parseHeader(): FrameHead | null {
    const [first] = header;
    if (first === undefined) return null;
    let length = 0;
    let lengthBytes = 0;
    for (;;) {
      const digit = header[1 + lengthBytes];
      if (digit === undefined) return null;
      length += (digit & 127) * 128 ** lengthBytes;
      lengthBytes += 1;
      if (digit < 128) break;
      if (lengthBytes === 4) throw new FrameError('The length of a frame has more than four bytes');
    }
    const type = first >> 4;
    if (isFirst && type !== CONNECT) throw new FrameError('The first frame is not CONNECT');
    if (isFirst && length > maxConnectBytes) throw new FrameError(`CONNECT has ${length} bytes, at most ${maxConnectBytes} are taken`);
    const isLong = length > MAX_PAYLOAD_BYTES;
    if (isLong && type !== PUBLISH) throw new FrameError(`A frame of type ${type} has ${length} bytes`);
    if (!isLong) return begin(type, [first, ...encodeLength(length)], length, 0);

    const high = header[1 + lengthBytes];
    const low = header[2 + lengthBytes];
    if (high === undefined || low === undefined) return null;
    const topicBytes = high * 256 + low;
    const envelopeBytes = 2 + topicBytes + ((first & 0b110) === 0 ? 0 : 2);
    if (envelopeBytes > MAX_ENVELOPE_BYTES) throw new FrameError(`A topic has ${topicBytes} bytes`);
    const kept = Math.min(length, envelopeBytes + MAX_PAYLOAD_BYTES + 1);
    return begin(type, [first, ...encodeLength(kept), high, low], kept - 2, length - kept);
  }

  function begin(type: number, bytes: number[], bodyBytes: number, discardBytes: number): FrameHead {
    header = [];
    forward = bodyBytes;
    discard = discardBytes;
    isFirst = false;
    return { type, bytes: Buffer.from(bytes) };
  }

  return {
    /**
     * Takes bytes from `chunk` up to the end of a header, or of the chunk.
     * @throws {FrameError} when the stream cannot be one of a device.
     */
    head(chunk: Buffer, offset: number): { head: FrameHead | null; offset: number } {
      let at = offset;
      while (at < chunk.length) {
        const byte = chunk[at++];
        if (byte !== undefined) header.push(byte);
        const head = parseHeader();
        if (head !== null) return { head, offset: at };
      }
      return { head: null, offset: at };
    },
    /** Takes what of the frame's body is in `chunk`; `bytes` is what of it is passed on. */
    body(chunk: Buffer, offset: number): { bytes: Buffer; offset: number } {
      const kept = Math.min(forward, chunk.length - offset);
      forward -= kept;
      const thrown = Math.min(discard, chunk.length - offset - kept);
      discard -= thrown;
      return { bytes: chunk.subarray(offset, offset + kept), offset: offset + kept + thrown };
    },
    /** Whether the frame whose head was read has more body to come. */
    isInBody: () => forward > 0 || discard > 0,
  };
}
