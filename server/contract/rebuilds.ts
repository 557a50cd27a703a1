import { z } from 'zod';
import { dataOf, instantSchema, pageOf, pageShape } from './common.js';
import { idInput } from './watches.js';

/** `waiting` for the projector; `running`: a part is done; `stopped` by somebody, to be resumed. */
export const rebuildStates = ['waiting', 'running', 'stopped', 'done'] as const;
export type RebuildState = (typeof rebuildStates)[number];

/** A change of the configuration, `npm run rebuild`, or reads that were released. */
export const rebuildCauses = ['configuration', 'command', 'release'] as const;
export type RebuildCause = (typeof rebuildCauses)[number];

export const rebuildListQuery = z.object({
  state: z.enum(rebuildStates).optional(),
  ...pageShape,
});
export type RebuildListQuery = z.infer<typeof rebuildListQuery>;

export const rebuildParams = z.object({ id: idInput });

/** History that is made anew from the reads. */
export const rebuildView = z
  .object({
    id: z.number().int(),
    label: z.string().meta({ description: 'What made it necessary, in words' }),
    cause: z.enum(rebuildCauses),
    state: z.enum(rebuildStates),
    doneShare: z.number().min(0).max(1).meta({ description: 'By the time that it covers' }),
    readPoints: z.number().int().meta({ description: 'How many it touches' }),
    since: instantSchema.nullable().meta({ description: 'Begin of what it covers' }),
    until: instantSchema.nullable(),
    requestedBy: z.object({ name: z.string() }).nullable(),
    requestedAt: instantSchema,
    finishedAt: instantSchema.nullable(),
    can: z.object({ stop: z.boolean(), resume: z.boolean() }),
  })
  .meta({ id: 'Rebuild' });
export type RebuildView = z.infer<typeof rebuildView>;

export const rebuildListAnswer = pageOf(rebuildView);
export type RebuildListAnswer = z.infer<typeof rebuildListAnswer>;

export const rebuildAnswer = dataOf(rebuildView);
