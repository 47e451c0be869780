import { z } from 'zod';

/** RFC 9457 problem details, with `errors` for bad input. */
export const problemSchema = z.object({
  type: z.string(),
  title: z.string(),
  status: z.number().int(),
  detail: z.string(),
  /** With 409: the stable code of the rule that forbids it. */
  rule: z.string().optional(),
  errors: z.array(z.object({ path: z.string(), message: z.string() })).optional(),
});
export type Problem = z.infer<typeof problemSchema>;
