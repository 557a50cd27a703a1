import { z } from 'zod';
import { dataOf, namedSchema } from './common.js';

/** A case of the railway that the demo shows, and what shows it. */
export const demoCaseView = z
  .object({
    id: z.string(),
    title: z.string(),
    /** What happens there, in a line or two. */
    says: z.string(),
    cars: z.array(
      z.object({
        unitId: z.string(),
        display: z.string(),
        opens: z.boolean().meta({ description: 'The asker may open its page.' }),
      }),
    ),
    site: namedSchema.nullable(),
    screen: z
      .enum(['setAside', 'doubts'])
      .nullable()
      .meta({ description: 'A section that shows it, for those who may open it.' }),
  })
  .meta({ id: 'DemoCase' });
export type DemoCaseView = z.infer<typeof demoCaseView>;

export const demoCasesAnswer = dataOf(z.array(demoCaseView));
export type DemoCasesAnswer = z.infer<typeof demoCasesAnswer>;

/** A case as the invented region describes it, the same for everybody. */
export type DemoCase = Omit<DemoCaseView, 'cars'> & {
  cars: { unitId: string; display: string }[];
};
