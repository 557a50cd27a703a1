import { z } from 'zod';
import { organisationKinds } from './administration.js';
import { heartbeatView } from './heartbeat.js';
import { equipmentKinds, instantSchema, roles, siteKinds } from './common.js';

export const organisationView = z
  .object({ code: z.string(), name: z.string(), kind: z.enum(organisationKinds) })
  .meta({ id: 'Organisation' });
export type OrganisationView = z.infer<typeof organisationView>;

export const personView = z
  .object({
    id: z.number().int(),
    email: z.string(),
    name: z.string(),
    roles: z.array(z.enum(roles)),
    organisation: z.string().nullable(),
    sites: z.array(z.string()),
    timeZone: z.string(),
    canSignIn: z.boolean().meta({ description: 'A password has been set.' }),
  })
  .meta({ id: 'Person' });
export type PersonView = z.infer<typeof personView>;

/** Past its name, a site tells more only to those who work there and to administrators. */
export const siteView = z
  .object({
    code: z.string(),
    name: z.string(),
    kind: z.enum(siteKinds).optional(),
    latitude: z.number().optional(),
    longitude: z.number().optional(),
    timeZone: z.string().optional(),
    returnHours: z.number().optional(),
    dwellLimitHours: z.number().optional(),
    leads: z.array(z.object({ name: z.string(), equipped: z.boolean() })).optional(),
    heartbeat: heartbeatView
      .nullable()
      .optional()
      .meta({ description: 'For administrators; null: its reader never said anything.' }),
  })
  .meta({ id: 'Site' });
export type SiteView = z.infer<typeof siteView>;

const placeView = z.object({ site: z.string(), track: z.string().nullable() }).nullable();
const towardView = z.array(z.string()).meta({
  description: 'Nodes of the route graph next on the open line on that side.',
});

export const readPointView = z
  .object({
    site: z.string(),
    code: z.string(),
    name: z.string(),
    track: z.string().nullable(),
    kind: z.enum(['line', 'spot']),
    decreasingPlace: placeView,
    increasingPlace: placeView,
    decreasingToward: towardView,
    increasingToward: towardView,
    passGapSeconds: z.number().int(),
    visitGapSeconds: z.number().int(),
    drillMinutes: z.number().int(),
  })
  .meta({ id: 'ReadPoint' });
export type ReadPointView = z.infer<typeof readPointView>;

export const antennaView = z
  .object({
    site: z.string(),
    readPoint: z.string(),
    number: z.number().int(),
    offsetM: z.number(),
    side: z.enum(['left', 'right']),
  })
  .meta({ id: 'Antenna' });
export type AntennaView = z.infer<typeof antennaView>;

export const routeNodeView = z
  .object({
    code: z.string(),
    name: z.string(),
    latitude: z.number(),
    longitude: z.number(),
    site: z.string().nullable(),
  })
  .meta({ id: 'RouteNode' });
export type RouteNodeView = z.infer<typeof routeNodeView>;

export const routeEdgeView = z
  .object({
    id: z.number().int(),
    from: z.string(),
    to: z.string(),
    railMetres: z.number().int(),
    kind: z.enum(['rail', 'water']),
    line: z.string(),
  })
  .meta({ id: 'RouteEdge' });
export type RouteEdgeView = z.infer<typeof routeEdgeView>;

export const registeredView = z
  .object({
    unitId: z.string(),
    display: z.string(),
    scheme: z.enum(['aar', 'iso6346', 'uic']),
    kind: z.enum(equipmentKinds),
    carType: z.string().nullable(),
    owner: z.string().nullable(),
    lengthDm: z.number().int().nullable(),
    axles: z.number().int().nullable(),
    tags: z.array(
      z.object({
        value: z.string(),
        side: z.enum(['left', 'right']).nullable(),
        validFrom: instantSchema.nullable(),
        validTo: instantSchema.nullable(),
      }),
    ),
    formerly: z
      .array(
        z.object({
          unitId: z.string(),
          display: z.string(),
          validFrom: instantSchema.nullable(),
          validTo: instantSchema.nullable(),
        }),
      )
      .meta({ description: 'Numbers it carried before, the last first.' }),
  })
  .meta({ id: 'Registered' });
export type RegisteredView = z.infer<typeof registeredView>;

/** A reader's token, told this once. */
export const readerTokenView = z.object({ token: z.string() }).meta({ id: 'ReaderToken' });

/** An organisation's token, told this once. */
export const reportTokenView = z.object({ token: z.string() }).meta({ id: 'ReportToken' });

export const canSchema = z.object({ update: z.boolean(), delete: z.boolean() });

/** One record with what the asker may do to it. */
export const recordOf = <T extends z.ZodType>(view: T) => z.object({ data: view, can: canSchema });

/** What an upsert answers: one for one, a list for a list, in the order in which they came. */
export const storedOf = <T extends z.ZodType>(view: T) =>
  z.object({ data: z.union([view, z.array(view)]) });
