import { createHash } from 'node:crypto';
import { uuidv7 } from 'uuidv7';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { RuleError } from '../errors.ts';

/** JSON with its keys in order, so that the same body always hashes alike. */
function canonicalJson(value: unknown): string {
  return JSON.stringify(value, (_, inner: unknown) =>
    inner !== null && typeof inner === 'object' && !Array.isArray(inner)
      ? Object.fromEntries(Object.entries(inner).sort(([a], [b]) => (a < b ? -1 : 1)))
      : inner,
  );
}

export interface Claim {
  siteId: string;
  /** What is made, and below what: `test:<systemId>`. */
  kind: string;
  /** Made by the client, or absent. */
  id: string | undefined;
  /** The checked body without its id. */
  body: unknown;
  nowMs: number;
}

export interface Claimed {
  id: string;
  /** The same id and body came before: answer with what there is, and change nothing. */
  isRepeated: boolean;
}

/** Told in the same words whatever the id stands for, and in whichever site. */
export function idTaken(): RuleError {
  return new RuleError('id-taken', 'This id is already in use with other content; send it with a new id');
}

function hashOf(claim: Claim): string {
  return createHash('sha256')
    .update(canonicalJson([claim.siteId, claim.kind, claim.body]))
    .digest('hex');
}

/**
 * Takes an id for something that is about to be made, in the same transaction. Whatever became of the thing since, the
 * first request repeated is told from another request with the same id.
 * @throws {RuleError} `id-taken` for another body, kind or site, without telling which.
 */
export function claimId(tx: Transaction, claim: Claim): Claimed {
  const id = claim.id ?? uuidv7();
  const bodyHash = hashOf(claim);
  const earlier = tx.first(query.selectFrom('claimedId').select('bodyHash').where('id', '=', id));
  if (earlier === undefined) {
    tx.run(query.insertInto('claimedId').values({ id, siteId: claim.siteId, kind: claim.kind, bodyHash, createdAtMs: claim.nowMs }));
    return { id, isRepeated: false };
  }
  if (earlier.bodyHash !== bodyHash) throw idTaken();
  return { id, isRepeated: true };
}

/** Lets a later request with the id of something that was deleted stand for it from now on. */
export function renewClaim(tx: Transaction, claim: Claim & { id: string }): void {
  const { id, siteId, kind, nowMs } = claim;
  const bodyHash = hashOf(claim);
  tx.run(
    query
      .insertInto('claimedId')
      .values({ id, siteId, kind, bodyHash, createdAtMs: nowMs })
      .onConflict((conflict) => conflict.column('id').doUpdateSet({ bodyHash })),
  );
}
