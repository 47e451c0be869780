import type { Socket } from 'node:net';
import { Duplex } from 'node:stream';
import { createFrameScanner, type FrameHead, PUBLISH } from './frame-scanner.ts';
import type { TokenBucket } from './token-bucket.ts';

/** CONNECT with its names, password and will; nothing longer is read from somebody who has not signed in. */
const MAX_CONNECT_BYTES = 1_024;

/**
 * Stands between a socket and the broker, which itself would buffer frames of any size from anybody.
 * Passes CONNECT on alone, holds everything behind it until the broker has accepted it, and then lets messages through
 * at the device's rate. What is held is at most one chunk: the socket is not read meanwhile, and TCP slows the sender.
 */
export class GuardedConnection extends Duplex {
  readonly remoteAddress: string;
  private readonly socket: Socket;
  private readonly scanner = createFrameScanner(MAX_CONNECT_BYTES);
  private chunk: Buffer = Buffer.alloc(0);
  private offset = 0;
  /** A message that waits for its turn. */
  private waiting: FrameHead | null = null;
  private timer: NodeJS.Timeout | null = null;
  private isConnectPassed = false;
  private bucket: TokenBucket | null = null;
  private wantsMore = true;
  private hasEnded = false;
  private isInputOver = false;

  constructor(socket: Socket) {
    super();
    this.socket = socket;
    this.remoteAddress = socket.remoteAddress ?? '';
    socket.on('data', (data: Buffer) => this.hold(data));
    socket.on('end', () => {
      this.hasEnded = true;
      this.pump();
    });
    socket.on('error', (error) => this.destroy(error));
    socket.on('close', () => this.destroy());
    // A broken pipe is told to the broker by its own listener; without one here it would end the process.
    this.on('error', () => this.socket.destroy());
  }

  /** The broker has accepted the client: what follows CONNECT may pass, at the rate of `bucket`. */
  accept(bucket: TokenBucket): void {
    this.bucket = bucket;
    this.pump();
  }

  private hold(data: Buffer): void {
    this.chunk = this.offset < this.chunk.length ? Buffer.concat([this.chunk.subarray(this.offset), data]) : data;
    this.offset = 0;
    this.pump();
  }

  private pump(): void {
    if (this.destroyed || this.isInputOver) return;
    try {
      while (this.wantsMore && this.step());
    } catch (error) {
      this.destroy(error instanceof Error ? error : new Error(String(error)));
      return;
    }
    const isAllRead = this.offset >= this.chunk.length && this.waiting === null;
    if (isAllRead && this.hasEnded) {
      this.isInputOver = true;
      this.push(null);
    } else if (isAllRead && this.wantsMore) this.socket.resume();
    else this.socket.pause();
  }

  /** Passes on the next piece; false when there is none, or it must wait. */
  private step(): boolean {
    if (this.waiting === null && this.scanner.isInBody()) {
      if (this.offset >= this.chunk.length) return false;
      const { bytes, offset } = this.scanner.body(this.chunk, this.offset);
      this.offset = offset;
      if (bytes.length > 0) this.wantsMore = this.push(bytes);
      return true;
    }
    if (this.isConnectPassed && this.bucket === null) return false;
    if (this.waiting === null) {
      const { head, offset } = this.scanner.head(this.chunk, this.offset);
      this.offset = offset;
      if (head === null) return false;
      this.waiting = head;
    }
    if (this.waiting.type === PUBLISH && this.bucket !== null && !this.bucket.take()) {
      this.timer ??= setTimeout(() => {
        this.timer = null;
        this.pump();
      }, this.bucket.waitMs());
      return false;
    }
    this.isConnectPassed = true;
    this.wantsMore = this.push(this.waiting.bytes);
    this.waiting = null;
    return true;
  }

  override _read(): void {
    this.wantsMore = true;
    this.pump();
  }

  override _write(data: Buffer, _encoding: BufferEncoding, done: (error?: Error | null) => void): void {
    this.socket.write(data, done);
  }

  override _writev(pieces: { chunk: Buffer }[], done: (error?: Error | null) => void): void {
    this.socket.write(Buffer.concat(pieces.map((piece) => piece.chunk)), done);
  }

  override _final(done: (error?: Error | null) => void): void {
    this.socket.end(done);
  }

  override _destroy(error: Error | null, done: (error?: Error | null) => void): void {
    if (this.timer !== null) clearTimeout(this.timer);
    this.socket.destroy();
    done(error);
  }
}
