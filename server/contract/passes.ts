import { z } from 'zod';
import { dataOf, equipmentKinds, instantSchema, namedSchema } from './common.js';

/** `SITE-POINT-time`, the time in base 36, and `-n` where several began in one millisecond. */
export const PASS_ID = /^([A-Z0-9]{1,16})-([A-Z0-9]{1,16})-([0-9a-z]{1,9})(?:-([0-9]{1,3}))?$/;

export const passParams = z.object({
  passId: z.string().regex(PASS_ID, 'is not the id of a pass'),
});

const passUnitSchema = z
  .object({
    position: z.number().int(),
    unitId: z.string().nullable().meta({ description: "Null: somebody else's." }),
    display: z.string().nullable(),
    kind: z.enum(equipmentKinds),
  })
  .meta({ id: 'PassUnit' });

/** A train or cut that went by a read point; its units in order of their first reads. */
export const passSchema = z
  .object({
    id: z.string(),
    site: namedSchema,
    readPoint: namedSchema,
    startedAt: instantSchema,
    endedAt: instantSchema,
    direction: z.enum(['increasing', 'decreasing', 'unknown']),
    directionBasis: z.enum(['sensors', 'antennas', 'history']).nullable(),
    speedKmh: z.number().nullable(),
    units: z.array(passUnitSchema),
  })
  .meta({ id: 'Pass' });
export type PassView = z.infer<typeof passSchema>;

export const passAnswer = dataOf(passSchema);
