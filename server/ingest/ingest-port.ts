import type { Uplink } from '#shared/mqtt/topics.ts';
import type { ReceiptPayload, StatePayload } from '#shared/mqtt/payloads.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';

/** The registered device that a message came from. */
export interface MessageDevice {
  id: string;
  siteId: string;
  systemId: string;
}

/** What the orders' side does with a message, inside the same unit of work. */
export interface IngestHooks {
  onReceipt(tx: Transaction, device: MessageDevice, receipt: ReceiptPayload, receivedMs: number): void;
  onState(tx: Transaction, device: MessageDevice, state: StatePayload, receivedMs: number): void;
  onRun(tx: Transaction, device: MessageDevice, run: Row<'run'>, receivedMs: number): void;
}

export interface IncomingMessage {
  deviceId: string;
  word: Uplink;
  payload: Buffer;
  receivedMs: number;
  isWill: boolean;
  /** An old message that an external broker had kept: its content counts, its arrival is no sign of life. */
  retained?: boolean;
}

/** A raw message as it came, kept in memory for the eyes of whoever sets a device up. */
export interface RecentMessage {
  seq: number;
  receivedMs: number;
  topic: string;
  bytes: number;
  payload: string;
  /** `stored`, `nothing-new`, `refused:<reason>`, `unknown-device` or `failed`. */
  outcome: string;
}

export interface Ingest {
  /**
   * Resolves once the message, or its refusal, is on disk: only then may it be acknowledged.
   * Calls keep their order. Rejects when it could not be stored; then it must not be acknowledged.
   */
  receive(message: IncomingMessage): Promise<void>;
  /** The newest raw messages of a device since the start, newest first. */
  recentMessages(deviceId: string): RecentMessage[];
  /** Marks devices offline that were silent for 90 s. */
  sweepSilent(nowMs: number): Promise<void>;
}
