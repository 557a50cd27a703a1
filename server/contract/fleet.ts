import { z } from 'zod';
import { dataOf, instantSchema, namedSchema } from './common.js';

/** What the opening sentence of Fleet says, over all that the person may see. */
export const fleetSummary = z
  .object({
    total: z.number().int(),
    onHand: z.number().int(),
    enRoute: z.number().int(),
    unseen: z.number().int(),
    quiet: z.number().int(),
    pastLimit: z.number().int(),
    readLast24h: z.number().int(),
    holds: z
      .object({ cars: z.boolean(), boxes: z.boolean() })
      .meta({ description: 'What the total is made of, for its noun.' }),
    oldestPastLimit: z
      .object({
        unitId: z.string(),
        display: z.string(),
        hours: z.number().meta({ description: 'Since arrival, or since first seen there.' }),
        site: namedSchema,
      })
      .nullable(),
    asOf: instantSchema,
    projectorLagMs: z.number().int(),
  })
  .meta({ id: 'FleetSummary' });
export type FleetSummary = z.infer<typeof fleetSummary>;

export const fleetSummaryAnswer = dataOf(fleetSummary);
export type FleetSummaryAnswer = z.infer<typeof fleetSummaryAnswer>;
