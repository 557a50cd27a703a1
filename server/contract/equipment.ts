import { z } from 'zod';
import {
  codeSchema,
  dataOf,
  equipmentKinds,
  instantSchema,
  namedSchema,
  pageOf,
  pageShape,
  textSchema,
} from './common.js';

export const unitStates = ['onHand', 'enRoute', 'unseen'] as const;
export type UnitState = (typeof unitStates)[number];

/** The orders a list of equipment can be had in. */
export const equipmentSorts = ['attention', 'lastSeen', '-lastSeen', 'dwell', 'unit'] as const;
export type EquipmentSort = (typeof equipmentSorts)[number];

export const schemes = ['aar', 'iso6346', 'uic'] as const;
export const travelDirections = ['increasing', 'decreasing', 'unknown'] as const;
export const movementBases = ['read', 'report', 'hand', 'inferred', 'unknown'] as const;
export const lastSeenBases = ['read', 'riding', 'report', 'hand'] as const;
export const directionBases = ['sensors', 'antennas', 'history'] as const;
export const passageRoles = ['crossing', 'presence', 'returned', 'stray'] as const;
/** Why a stray is in no pass: it stood beside the track, or went by on the next one. */
export const strayReasons = ['beside', 'parallel'] as const;
export const tagSides = ['left', 'right'] as const;

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
    unseenLeads: z
      .array(z.string())
      .meta({ description: 'Leads of the site it was last at where no reader stands.' }),
    asOf: instantSchema,
  })
  .meta({ id: 'EquipmentDetail' });
export type EquipmentDetail = z.infer<typeof equipmentDetail>;

export const equipmentDetailAnswer = dataOf(equipmentDetail).extend({
  can: z.object({ watch: z.boolean() }),
});
export type EquipmentDetailAnswer = z.infer<typeof equipmentDetailAnswer>;
