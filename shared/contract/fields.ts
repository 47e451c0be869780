import { z } from 'zod';

/** UUIDv7 made by the server, or any UUID made by a client that wants to repeat a request safely. */
export const idSchema = z.uuid();

/** RFC 3339 with an offset. */
export const timestampSchema = z.iso.datetime({ offset: true });

/** An IANA zone that this JavaScript engine knows. */
export const timeZoneSchema = z
  .string()
  .max(64)
  .refine((zone) => {
    try {
      new Intl.DateTimeFormat('en', { timeZone: zone });
      return true;
    } catch {
      return false;
    }
  }, 'Give an IANA time zone such as Europe/Lisbon');

/** A name that a person gave: trimmed, one line, not empty. */
export const nameSchema = z
  .string()
  .trim()
  .min(1, 'Give a name')
  .max(80, 'Use at most 80 characters')
  .regex(/^[^\u0000-\u001f\u007f]*$/, 'Use one line without control characters');

export const noteSchema = z.string().trim().max(2000, 'Use at most 2000 characters').default('');

/** Litres of water, above zero and below what any system in this trade holds. */
export const litresSchema = z.number().positive('Give litres above 0').max(1_000_000);

/** Millilitres of a product, above zero. */
export const millilitresSchema = z.number().positive('Give millilitres above 0').max(100_000);

/** Optional id made by the client: the same id and body again is answered with the first result. */
export const clientIdSchema = idSchema.optional();

export const pageQuerySchema = z.object({
  limit: z.coerce.number().int().min(1).max(500).default(50),
  cursor: z.string().max(200).optional(),
});
export type PageQuery = z.infer<typeof pageQuerySchema>;

/** The query of a list that is short by nature: without a limit it comes whole, up to the most that a page holds. */
export const shortListQuerySchema = pageQuerySchema.extend({ limit: z.coerce.number().int().min(1).max(500).default(500) });

/** Every list: newest first, `next` is the cursor of the following page or null. */
export function pageOf<Item extends z.ZodType>(item: Item) {
  return z.object({ items: z.array(item), next: z.string().nullable() });
}

/** A time range of a query: RFC 3339, or epoch milliseconds for chart columns. `from` inclusive, `to` exclusive. */
export const rangeTimeSchema = z.union([
  timestampSchema.transform((text) => Date.parse(text)),
  z
    .string()
    .regex(/^\d{1,15}$/, 'Give an RFC 3339 time or epoch milliseconds')
    .transform(Number),
  z.number().int().nonnegative(),
]);

export const emptySchema = z.object({});
