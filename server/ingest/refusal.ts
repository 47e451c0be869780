/** Why a message was refused, as kept with it. Codes are stable; the sentence is made where it is shown. */
export type RefusalReason =
  | 'too-big'
  | 'not-json'
  | 'wrong-shape'
  | 'not-finite'
  | 'out-of-range'
  | 'too-early'
  | 'too-far-ahead'
  | 'too-old'
  | 'unsupported-version'
  | 'must-understand'
  | 'bad-channel'
  | 'too-many-channels'
  | 'unit-changed';

/** A message that does not fit. It is acknowledged all the same, or the device would send it for ever. */
export class Refusal extends Error {
  readonly reason: RefusalReason;
  constructor(reason: RefusalReason) {
    super(reason);
    this.reason = reason;
  }
}
