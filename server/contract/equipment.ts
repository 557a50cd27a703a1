import { z } from 'zod';
import {
  codeSchema,
  dataOf,
  equipmentKinds,
  instantInput,
  instantSchema,
  namedSchema,
  pageOf,
  pageShape,
  textSchema,
} from './common.js';

export const unitStates = ['onHand', 'enRoute', 'unseen'] as const;
export type UnitState = (typeof unitStates)[number];

/** The orders a list of equipment can be had in; each has its own index or bounded set. */
export const equipmentSorts = ['attention', 'lastSeen', '-lastSeen', 'dwell', 'unit'] as const;
export type EquipmentSort = (typeof equipmentSorts)[number];

export const schemes = ['aar', 'iso6346', 'uic'] as const;
export const travelDirections = ['increasing', 'decreasing', 'unknown'] as const;
export const movementBases = ['read', 'report', 'hand', 'inferred', 'unknown'] as const;
export const lastSeenBases = ['read', 'riding', 'report', 'hand'] as const;
export const directionBases = ['sensors', 'antennas', 'history'] as const;
export const passageRoles = ['crossing', 'presence', 'returned'] as const;
export const tagSides = ['left', 'right'] as const;

/** Stays in one answer of a unit's movements, at most. */
export const MOST_STAYS = 500;

const flag = z
  .enum(['true', 'false'], 'must be true or false')
  .transform((text) => text === 'true');

/** What narrows and orders the list of equipment; every filter narrows further. */
export const equipmentQuery = z.object({
  search: textSchema(40)
    .optional()
    .meta({ description: 'A number alone, a mark, or the beginning of either; former ones too.' }),
  state: z.enum(unitStates).optional(),
  quiet: flag.optional(),
  pastLimit: flag.optional(),
  site: codeSchema.optional().meta({ description: 'Where it was last seen.' }),
  owner: z
    .string()
    .regex(/^[A-Za-z0-9]{1,16}$/, 'must be the id or code of an organisation')
    .optional(),
  kind: z.enum(equipmentKinds).optional(),
  sort: z.enum(equipmentSorts).default('attention'),
  ...pageShape,
});
export type EquipmentQuery = z.output<typeof equipmentQuery>;

/** The raw text of the address: forms that people write are answered with the way to the right one. */
export const unitParams = z.object({ unitId: z.string().min(1).max(40) });

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

const sitePlace = namedSchema.extend({ latitude: z.number(), longitude: z.number() });
const ownerSchema = z.object({ id: z.number(), code: z.string(), name: z.string() });

const lastSeenSchema = z.object({
  site: sitePlace.nullable(),
  track: z.string().nullable(),
  readPoint: namedSchema.nullable(),
  at: instantSchema,
  direction: z.enum(travelDirections),
  basis: z.enum(lastSeenBases),
  passId: z.string().nullable(),
});

/** The stay that goes on now; null unless the state is onHand. */
const presentStaySchema = z.object({
  arrivedAt: instantSchema.nullable().meta({ description: 'Null: it was there before.' }),
  firstSeenAt: instantSchema,
  dwellMinutes: z.number().int(),
  atLeast: z.boolean().meta({ description: 'Dwell counts from the first sighting.' }),
  limitHours: z.number().nullable().meta({ description: 'What the site allows; null: no limit.' }),
  limitAt: instantSchema.nullable(),
});

const equipmentFacts = z.object({
  unitId: z.string().meta({ description: 'Compact identity, as in addresses.' }),
  display: z.string(),
  scheme: z.enum(schemes),
  kind: z.enum(equipmentKinds),
  carType: z.string().nullable(),
  registered: z.boolean(),
  owner: ownerSchema.nullable(),
  state: z.enum(unitStates),
  quiet: z.boolean(),
  quietAt: instantSchema
    .nullable()
    .meta({ description: 'When it becomes or became quiet; null: does not apply.' }),
  pastLimit: z.boolean(),
  lastSeen: lastSeenSchema.nullable(),
  between: z
    .object({ from: namedSchema.nullable() })
    .nullable()
    .meta({ description: 'En route only: the site it was last read at or left.' }),
  stay: presentStaySchema.nullable(),
});

/** A row of the list of equipment. */
export const equipmentItem = equipmentFacts.meta({ id: 'Equipment' });
export type EquipmentItem = z.infer<typeof equipmentItem>;

export const equipmentListAnswer = pageOf(equipmentItem);
export type EquipmentListAnswer = z.infer<typeof equipmentListAnswer>;

const unitTag = z.object({
  value: z.string(),
  side: z.enum(tagSides).nullable(),
  validFrom: instantSchema.nullable(),
  validTo: instantSchema.nullable(),
});

const unitIdentity = z.object({
  unitId: z.string(),
  display: z.string(),
  scheme: z.enum(schemes),
  validFrom: instantSchema.nullable(),
  validTo: instantSchema.nullable(),
  current: z.boolean(),
});

/**
 * One unit whole. `sitesOnly`: the person sees only what happened at their own sites, so state,
 * last seen and history end there.
 */
export const equipmentDetail = equipmentFacts
  .extend({
    lengthDm: z.number().int().nullable(),
    axles: z.number().int().nullable(),
    identities: z.array(unitIdentity),
    tags: z.array(unitTag),
    lease: z.null().meta({ description: 'Nobody leases yet.' }),
    riding: z.array(z.object({ unitId: z.string(), display: z.string() })).meta({
      description: 'Boxes on this car; empty until boxes are placed on cars.',
    }),
    carriedBy: z.object({ unitId: z.string(), display: z.string() }).nullable(),
    sitesOnly: z.boolean(),
    asOf: instantSchema,
  })
  .meta({ id: 'EquipmentDetail' });
export type EquipmentDetail = z.infer<typeof equipmentDetail>;

export const equipmentDetailAnswer = dataOf(equipmentDetail).extend({
  can: z.object({ watch: z.boolean() }),
});
export type EquipmentDetailAnswer = z.infer<typeof equipmentDetailAnswer>;

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
    through: z.boolean().nullable().meta({ description: 'Null: not judged yet.' }),
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

/** All passages of the unit in one pass. `sides` are the tag sides that answered. */
export const sightingSchema = z
  .object({
    passId: z.string(),
    site: namedSchema,
    readPoint: namedSchema,
    track: z.string().nullable(),
    startedAt: instantSchema,
    endedAt: instantSchema,
    direction: z.enum(travelDirections),
    directionBasis: z.enum(directionBases).nullable(),
    basis: z.enum(lastSeenBases),
    role: z.enum(passageRoles),
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
    passId: z.string(),
  })
  .meta({ id: 'RawRead' });
export type RawReadView = z.infer<typeof rawReadSchema>;

export const readsAnswer = pageOf(rawReadSchema);
export type ReadsAnswer = z.infer<typeof readsAnswer>;
