import { z } from 'zod';
import { siteKinds } from './common.js';

/** West, south, east, north in degrees; a box over the date line has its west east of its east. */
const bboxSchema = z
  .string()
  .max(120)
  .transform((text) => text.split(',').map((part) => (part.trim() === '' ? NaN : Number(part))))
  .refine(isBox, 'must be west,south,east,north in degrees')
  .transform(([west = 0, south = 0, east = 0, north = 0]) => ({ west, south, east, north }))
  .meta({ override: { type: 'string', description: 'west,south,east,north in degrees' } });

function isBox(edges: number[]): boolean {
  const [west = NaN, south = NaN, east = NaN, north = NaN] = edges;
  const isLongitude = (degrees: number) => degrees >= -180 && degrees <= 180;
  return (
    edges.length === 4 &&
    isLongitude(west) &&
    isLongitude(east) &&
    south >= -90 &&
    north <= 90 &&
    south <= north
  );
}

export const mapQuery = z.object({
  bbox: bboxSchema.optional(),
  zoom: z
    .string()
    .regex(/^\d{1,2}(\.\d{1,4})?$/, 'must be a number from 0 to 24')
    .transform(Number)
    .refine((zoom) => zoom <= 24, 'must be a number from 0 to 24')
    .optional()
    .meta({ override: { type: 'number', minimum: 0, maximum: 24 } }),
});
export type MapQuery = z.output<typeof mapQuery>;

const position = z.tuple([z.number(), z.number()]);

const count = z.number().int().nullable();

/** A site. Counts are of what the person may see; null where they see nothing of the site. */
export const siteFeature = z.object({
  type: z.literal('Feature'),
  id: z.string(),
  geometry: z.object({ type: z.literal('Point'), coordinates: position }),
  properties: z.object({
    feature: z.literal('site'),
    code: z.string(),
    name: z.string(),
    kind: z.enum(siteKinds),
    onHand: count,
    enRoute: count.meta({ description: 'Between sites, last read or left here.' }),
    quiet: count.meta({ description: 'Of those en route.' }),
    pastLimit: count.meta({ description: 'Of those on hand.' }),
    unseenLeads: z.array(z.string()).meta({ description: 'Leads where no reader stands.' }),
  }),
});
export type SiteFeature = z.infer<typeof siteFeature>;

/** A stretch of the route graph between two of its nodes (sites and junctions). */
export const edgeFeature = z.object({
  type: z.literal('Feature'),
  id: z.string(),
  geometry: z.object({ type: z.literal('LineString'), coordinates: z.array(position) }),
  properties: z.object({
    feature: z.literal('edge'),
    from: z.object({ code: z.string(), name: z.string() }),
    to: z.object({ code: z.string(), name: z.string() }),
    line: z.string(),
    kind: z.enum(['rail', 'water']),
    railMetres: z.number().int(),
  }),
});
export type EdgeFeature = z.infer<typeof edgeFeature>;

/** GeoJSON (RFC 7946): edges first, so that rings are drawn over them. */
export const mapAnswer = z
  .object({
    type: z.literal('FeatureCollection'),
    features: z.array(z.union([siteFeature, edgeFeature])),
  })
  .meta({ id: 'Map' });
export type MapAnswer = z.infer<typeof mapAnswer>;
