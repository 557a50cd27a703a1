import { z } from 'zod';
import { dataOf, textSchema } from './common.js';

export const lookUpQuery = z.object({
  q: textSchema(200).meta({ description: 'A number, a mark, a box, a site; or part of one.' }),
});

export const lookUpHit = z
  .object({
    kind: z.enum(['equipment', 'site']),
    id: z.string().meta({ description: 'unitId or site code' }),
    display: z.string(),
    formerly: z
      .string()
      .nullable()
      .meta({ description: 'The number that it was found by, where it carries another now.' }),
    detail: z.string(),
  })
  .meta({ id: 'LookUpHit' });
export type LookUpHit = z.infer<typeof lookUpHit>;

/** `problem` is a sentence for the person: what is wrong with what they typed, or was not found. */
export const lookUpAnswer = dataOf(
  z.object({ hits: z.array(lookUpHit), problem: z.string().nullable() }),
);
export type LookUpAnswer = z.infer<typeof lookUpAnswer>;
