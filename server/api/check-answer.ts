import { isDeepStrictEqual } from 'node:util';
import type { Endpoint } from '#shared/contract/endpoint.ts';

/**
 * Holds an answer to the schema that the endpoint promises, with nothing missing and nothing besides.
 * @throws {Error} that names what differs.
 */
export function checkAnswer(name: string, described: Endpoint, answer: unknown): void {
  const sent: unknown = JSON.parse(JSON.stringify(answer));
  const parsed = described.answer.safeParse(sent);
  if (!parsed.success) throw new Error(`The answer of ${name} breaks its schema: ${parsed.error.message}`);
  if (!isDeepStrictEqual(JSON.parse(JSON.stringify(parsed.data)), sent)) {
    throw new Error(`The answer of ${name} holds what its schema does not: ${JSON.stringify(sent)}`);
  }
}
