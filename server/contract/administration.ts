import { z } from 'zod';
import {
  codeSchema,
  equipmentKinds,
  instantInput,
  pageShape,
  roles,
  siteKinds,
  textSchema,
  timeZoneSchema,
} from './common.js';

export const organisationKinds = [
  'railroad',
  'carOwner',
  'containerLine',
  'lessor',
  'shipper',
  'terminal',
  'other',
] as const;

/** Rows of one request; passwords cost time, so people come in smaller groups. */
export const MOST_ITEMS = 5_000;
export const MOST_PEOPLE = 200;

export const organisationInput = z
  .object({ code: codeSchema, name: textSchema(120), kind: z.enum(organisationKinds) })
  .meta({ id: 'OrganisationInput' });
export type OrganisationInput = z.output<typeof organisationInput>;

const passwordSchema = z
  .string()
  .min(12, 'must have at least 12 characters')
  .refine(
    (text) => new TextEncoder().encode(text).length <= 72,
    'must have at most 72 bytes as UTF-8',
  );

export const personInput = z
  .object({
    email: z
      .string()
      .trim()
      .toLowerCase()
      .max(254, 'must have at most 254 characters')
      .pipe(z.email('must be a mail address')),
    name: textSchema(120),
    roles: z
      .array(z.enum(roles))
      .min(1, 'must name at least one role')
      .max(20, 'names too many')
      .transform((names) => roles.filter((role) => names.includes(role))),
    organisation: codeSchema.nullish(),
    sites: z.array(codeSchema).max(1_000, 'names too many').optional(),
    timeZone: timeZoneSchema.optional(),
    password: passwordSchema.optional(),
  })
  .meta({ id: 'PersonInput' });
export type PersonInput = z.output<typeof personInput>;

const degrees = (most: number) =>
  z
    .number()
    .min(-most, `must lie between -${most} and ${most} degrees`)
    .max(most, `must lie between -${most} and ${most} degrees`);
const latitude = degrees(90);
const longitude = degrees(180);

/** A track by which a site is entered or left; readers stand at those that are equipped. */
const leadSchema = z.object({ name: textSchema(40), equipped: z.boolean() });

export const siteInput = z
  .object({
    code: codeSchema,
    name: textSchema(120),
    kind: z.enum(siteKinds),
    latitude,
    longitude,
    timeZone: timeZoneSchema,
    returnHours: z.number().min(0).max(1_000).optional(),
    dwellLimitHours: z.number().min(0.01).max(20_000).optional(),
    leads: z
      .array(leadSchema)
      .max(32)
      .refine(haveNamesOfTheirOwn, 'must not name one twice')
      .optional()
      .meta({ description: 'All its leads; an empty list: not known.' }),
  })
  .meta({ id: 'SiteInput' });
export type SiteInput = z.output<typeof siteInput>;

function haveNamesOfTheirOwn(leads: readonly { name: string }[]): boolean {
  return new Set(leads.map(({ name }) => name)).size === leads.length;
}

/** A side of a read point: a site, with the track where it is known; null is the open line. */
export const placeSchema = z.object({
  site: codeSchema,
  track: textSchema(40)
    .nullish()
    .transform((track) => track ?? null),
});
export type Place = z.output<typeof placeSchema>;

/** Each node of the route graph next on the open line, once. */
const towardSchema = z
  .array(codeSchema)
  .max(20, 'names more than 20')
  .refine((codes) => new Set(codes).size === codes.length, 'must not name one twice')
  .meta({
    description:
      'Nodes of the route graph next on the open line on that side; none where it is a site.',
  });

export const readPointInput = z
  .object({
    site: codeSchema,
    code: codeSchema,
    name: textSchema(120),
    track: textSchema(40).nullish(),
    kind: z.enum(['line', 'spot']),
    decreasingPlace: placeSchema.nullable().optional(),
    increasingPlace: placeSchema.nullable().optional(),
    decreasingToward: towardSchema.optional(),
    increasingToward: towardSchema.optional(),
    passGapSeconds: z.int().min(1).max(86_400).optional(),
    visitGapSeconds: z.int().min(1).max(86_400).optional(),
    drillMinutes: z.int().min(0).max(10_080).optional(),
  })
  .meta({ id: 'ReadPointInput' });
export type ReadPointInput = z.output<typeof readPointInput>;

export const antennaNumber = z.int().min(1).max(255);

export const antennaInput = z
  .object({
    site: codeSchema,
    readPoint: codeSchema,
    number: antennaNumber,
    offsetM: z.number().min(-10_000).max(10_000),
    side: z.enum(['left', 'right']),
  })
  .meta({ id: 'AntennaInput' });
export type AntennaInput = z.output<typeof antennaInput>;

export const routeNodeInput = z.object({
  code: codeSchema,
  name: textSchema(120),
  latitude,
  longitude,
  site: codeSchema.nullish(),
});

export const routeEdgeInput = z.object({
  from: codeSchema,
  to: codeSchema,
  railMetres: z.int().min(1).max(50_000_000),
  kind: z.enum(['rail', 'water']),
  line: textSchema(60),
});

export const routesInput = z
  .object({
    nodes: z.array(routeNodeInput).max(MOST_ITEMS).default([]),
    edges: z.array(routeEdgeInput).max(MOST_ITEMS).default([]),
  })
  .refine(({ nodes, edges }) => nodes.length + edges.length > 0, 'must hold nodes or edges')
  .meta({ id: 'RoutesInput' });
export type RoutesInput = z.output<typeof routesInput>;

const tagInput = z.object({
  value: z.string().max(200, 'must have at most 64 bytes'),
  side: z.enum(['left', 'right']).nullish(),
  validFrom: instantInput.nullish(),
  validTo: instantInput.nullish(),
});

const formerInput = z.object({
  unit: z.string().max(60, 'is too long for a mark and number'),
  validFrom: instantInput.nullish(),
  validTo: instantInput,
});

export const registerInput = z
  .object({
    unit: z.string().max(60, 'is too long for a mark and number'),
    kind: z.enum(equipmentKinds),
    carType: textSchema(60).nullish(),
    owner: codeSchema.nullish(),
    lengthDm: z.int().min(1).max(10_000).nullish(),
    axles: z.int().min(1).max(64).nullish(),
    tags: z.array(tagInput).max(16).optional(),
    formerly: z.array(formerInput).max(16).optional().meta({
      description: 'Numbers it carried before; the present one begins as the last ended.',
    }),
  })
  .meta({ id: 'RegisterInput' });
export type RegisterInput = z.output<typeof registerInput>;

/** From an instant on a unit carries another mark and number. */
export const renumberInput = z
  .object({ unit: z.string().max(60, 'is too long for a mark and number'), from: instantInput })
  .meta({ id: 'RenumberInput' });
export type RenumberInput = z.output<typeof renumberInput>;

/** From an instant on a unit wears a tag. */
export const putTagInput = z
  .object({
    value: z.string().max(200, 'must have at most 64 bytes'),
    side: z.enum(['left', 'right']).nullish(),
    validFrom: instantInput,
    takeFrom: z
      .boolean()
      .default(false)
      .meta({ description: 'Take it from the unit that wears it then.' }),
  })
  .meta({ id: 'PutTagInput' });
export type PutTagInput = z.output<typeof putTagInput>;

/** How a body that takes one or many is told in the interface document. */
export const batchOfSchema = <T extends z.ZodType>(item: T, most: number = MOST_ITEMS) =>
  z.union([item, z.array(item).min(1).max(most)]);

export const siteListQuery = z.object({ ...pageShape, site: codeSchema.optional() });
export const registerListQuery = z.object({ ...pageShape, owner: codeSchema.optional() });

export const codeParams = z.object({ code: codeSchema });
export const siteCodeParams = z.object({ site: codeSchema, code: codeSchema });
const wholeNumber = z
  .string()
  .regex(/^[1-9][0-9]{0,9}$/)
  .transform(Number)
  .meta({ override: { type: 'integer' } });
export const idParams = z.object({ id: wholeNumber });
export const antennaParams = z.object({ site: codeSchema, number: wholeNumber });
export const unitParams = z.object({ unitId: z.string().min(1).max(40) });
