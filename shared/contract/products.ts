import { z } from 'zod';
import { endpoint } from './endpoint.ts';
import { clientIdSchema, idSchema, nameSchema, pageOf, shortListQuerySchema } from './fields.ts';

export const substances = ['ethanol', 'methanol', 'acetic-acid', 'glucose', 'sucrose', 'water', 'other'] as const;

export const componentSchema = z.union([
  z.object({ substance: z.enum(substances), percentByVolume: z.number().positive().max(100) }),
  z.object({ substance: z.enum(substances), gramsPerLitre: z.number().positive().max(2000) }),
]);
export type Component = z.infer<typeof componentSchema>;

/** "`ml` (up to `maxMl`) per `perLitres` of water and `perDays`". */
export const labelSchema = z
  .object({
    ml: z.number().positive('Give the dose of the label, above 0').max(10_000),
    maxMl: z.number().positive().max(10_000).nullable().default(null),
    perLitres: z.number().positive('Give the litres of the label, above 0').max(1_000_000),
    perDays: z.number().positive('Give the days of the label, above 0').max(31),
  })
  .refine((label) => label.maxMl === null || label.maxMl >= label.ml, {
    path: ['maxMl'],
    message: 'The upper end of the range must not be under its lower end',
  });

export const productSchema = z.object({
  id: idSchema,
  siteId: idSchema,
  name: z.string(),
  form: z.enum(['liquid', 'pellets']),
  composition: z.array(componentSchema),
  label: labelSchema.nullable(),
  /** Theoretical oxygen demand, mg O2 per mL of product; null when the composition does not tell. */
  oxygenDemandMgPerMl: z.number().nullable(),
  carbonMgPerMl: z.number().nullable(),
});
export type Product = z.infer<typeof productSchema>;

export const productEndpoints = {
  listProducts: endpoint({
    method: 'get',
    path: '/sites/:siteId/products',
    who: 'viewer',
    summary: 'The carbon sources and other liquids of a site',
    query: shortListQuerySchema,
    answer: pageOf(productSchema),
  }),
  createProduct: endpoint({
    method: 'post',
    path: '/sites/:siteId/products',
    who: 'keeper',
    summary: 'Add a product with its composition and label',
    body: z.object({
      id: clientIdSchema,
      name: nameSchema,
      form: z.enum(['liquid', 'pellets']),
      composition: z
        .array(componentSchema)
        .max(12)
        .refine(
          (parts) => parts.reduce((sum, part) => sum + ('percentByVolume' in part ? part.percentByVolume : 0), 0) <= 100,
          'The parts add up to more than 100 % by volume',
        ),
      label: labelSchema.nullable().default(null),
    }),
    answer: productSchema,
  }),
};
