import { z } from 'zod';
import { instantInput, instantSchema, namedSchema, pageOf, pageShape } from './common.js';
import {
  directionBases,
  lastSeenBases,
  movementBases,
  passageRoles,
  strayReasons,
  tagSides,
  travelDirections,
} from './equipment.js';

/** Stays in one answer of a unit's movements, at most. */
export const MOST_STAYS = 500;

const spanShape = { from: instantInput.optional(), to: instantInput.optional() };

interface Span {
  from?: Date | undefined;
  to?: Date | undefined;
}

const isInOrder = ({ from, to }: Span) => !from || !to || from < to;
const orderFault = { path: ['to'], error: 'must be later than from' };

export const movementsQuery = z
  .object({
    ...spanShape,
    limit: z
      .string()
      .regex(/^[0-9]{1,9}$/, `must be a whole number from 1 to ${MOST_STAYS}`)
      .transform(Number)
      .refine((n) => n >= 1 && n <= MOST_STAYS, `must be a whole number from 1 to ${MOST_STAYS}`)
      .default(MOST_STAYS)
      .meta({
        override: { type: 'integer', minimum: 1, maximum: MOST_STAYS, default: MOST_STAYS },
      }),
    cursor: pageShape.cursor,
  })
  .refine(isInOrder, orderFault);
export type MovementsQuery = z.output<typeof movementsQuery>;

export const sightingsQuery = z
  .object({ ...spanShape, ...pageShape })
  .refine(isInOrder, orderFault);
export type SightingsQuery = z.output<typeof sightingsQuery>;

export const readsQuery = sightingsQuery;
export type ReadsQuery = SightingsQuery;

const boundsSchema = z
  .object({ earliest: instantSchema.nullable(), latest: instantSchema.nullable() })
  .nullable()
  .meta({ description: 'Null when it was observed.' });

export const staySchema = z
  .object({
    site: namedSchema,
    track: z.string().nullable(),
    firstSeenAt: instantSchema,
    lastSeenAt: instantSchema,
    arrivedAt: instantSchema.nullable(),
    arrivalBasis: z.enum(movementBases),
    arrivalBounds: boundsSchema,
    arrivalProvisional: z.boolean(),
    departedAt: instantSchema.nullable(),
    departureBasis: z.enum(movementBases).nullable(),
    departureBounds: boundsSchema,
    departureProvisional: z.boolean(),
    provisional: z.boolean().meta({ description: 'Either end may still be taken back.' }),
    through: z
      .boolean()
      .nullable()
      .meta({ description: 'It left with the train it came in; null: an end was not read.' }),
    dwellMinutes: z.number().int(),
    atLeast: z.boolean(),
    outOfDwell: z.boolean().meta({ description: 'Left out of dwell figures.' }),
    excursions: z
      .number()
      .int()
      .meta({ description: 'Times it went out by a lead and came back.' }),
  })
  .meta({ id: 'Stay' });
export type StayView = z.infer<typeof staySchema>;

export const legSchema = z
  .object({
    from: namedSchema,
    to: namedSchema,
    departedAt: instantSchema,
    arrivedAt: instantSchema.nullable(),
    railMetres: z.number().int(),
    minutes: z.number().int().nullable().meta({ description: 'Negative: clocks disagree.' }),
    estimated: z.boolean().meta({ description: 'Two routes are within ten per cent.' }),
  })
  .meta({ id: 'Leg' });
export type LegView = z.infer<typeof legSchema>;

/**
 * Stays that overlap the span, oldest first, and the legs that ended in it, each with the stay it
 * led to. `railMetres` sums all legs of the whole span, not of the page.
 */
export const movementsAnswer = z.object({
  data: z.object({
    stays: z.array(staySchema),
    legs: z.array(legSchema),
    railMetres: z.number().int(),
  }),
  next: z.string().nullable(),
});
export type MovementsAnswer = z.infer<typeof movementsAnswer>;

/**
 * All passages of the unit in one pass; of a stray, all beside one reader on a UTC day. `sides`
 * are the tag sides that answered.
 */
export const sightingSchema = z
  .object({
    passId: z.string().nullable().meta({ description: 'Null: a stray, which counts in no pass.' }),
    site: namedSchema,
    readPoint: namedSchema,
    track: z.string().nullable(),
    startedAt: instantSchema,
    endedAt: instantSchema,
    direction: z.enum(travelDirections),
    directionBasis: z.enum(directionBases).nullable(),
    basis: z.enum(lastSeenBases),
    role: z.enum(passageRoles),
    stray: z.enum(strayReasons).nullable(),
    doubted: z
      .boolean()
      .meta({ description: 'No train could have made it after the one before: it moved nothing.' }),
    speedKmh: z.number().nullable(),
    antennas: z.array(
      z.object({
        number: z.number().int(),
        side: z.enum(tagSides).nullable(),
        reads: z.number().int(),
      }),
    ),
    sides: z.array(z.enum(tagSides)),
    passages: z.number().int(),
    reads: z.number().int(),
  })
  .meta({ id: 'Sighting' });
export type SightingView = z.infer<typeof sightingSchema>;

export const sightingsAnswer = pageOf(sightingSchema);
export type SightingsAnswer = z.infer<typeof sightingsAnswer>;

/** A read as the reader gave it; a repeat of the same read is not kept. */
export const rawReadSchema = z
  .object({
    tag: z.string(),
    tagSide: z.enum(tagSides).nullable(),
    site: namedSchema,
    readPoint: namedSchema,
    antenna: z.number().int(),
    antennaSide: z.enum(tagSides).nullable(),
    readAt: instantSchema,
    rssi: z.number().nullable(),
    count: z.number().int().nullable(),
    receivedAt: instantSchema,
    passId: z.string().nullable(),
  })
  .meta({ id: 'RawRead' });
export type RawReadView = z.infer<typeof rawReadSchema>;

export const readsAnswer = pageOf(rawReadSchema);
export type ReadsAnswer = z.infer<typeof readsAnswer>;
