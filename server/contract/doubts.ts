import { z } from 'zod';
import { instantSchema, namedSchema, pageOf, pageQuery } from './common.js';

/** What may be behind a doubt: one tag on two cars, or the clock of a site. */
export const doubtKinds = ['tag', 'clock'] as const;
/** What speaks for the later sighting all the same. */
export const corroborations = ['mates', 'point', 'side'] as const;

const doubtedPlace = z.object({ at: instantSchema, site: namedSchema, readPoint: namedSchema });

/** Two sightings of one unit that no train could join. */
export const doubtSchema = z
  .object({
    unitId: z.string(),
    display: z.string(),
    ...doubtedPlace.shape,
    previous: doubtedPlace
      .extend({ railMetres: z.number().int() })
      .nullable()
      .meta({ description: 'Null: it was at a site that the person does not see.' }),
    corroboratedBy: z
      .enum(corroborations)
      .nullable()
      .meta({ description: 'Null: nothing, so that the later sighting moved nothing.' }),
    kind: z
      .enum(doubtKinds)
      .meta({ description: 'clock: five or more units are in doubt at the site within a day.' }),
  })
  .meta({ id: 'Doubt' });
export type DoubtView = z.infer<typeof doubtSchema>;

export const unitDoubtsAnswer = pageOf(doubtSchema);
export type UnitDoubtsAnswer = z.infer<typeof unitDoubtsAnswer>;

export const doubtsQuery = pageQuery;

/** Days back that the list of all doubts goes. */
export const DOUBT_DAYS = 30;

/** Doubts of the last 30 days that nothing has settled, the latest first. */
export const doubtsAnswer = pageOf(doubtSchema).extend({
  counts: z.object({
    doubts: z.number().int(),
    units: z.number().int(),
    clocks: z.array(namedSchema.extend({ units: z.number().int() })).meta({
      description: 'Sites whose clock may be wrong, with the units in doubt there.',
    }),
  }),
});
export type DoubtsAnswer = z.infer<typeof doubtsAnswer>;
