import { Router } from 'express';
import { mapAnswer, mapQuery } from '../contract/map.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import { presentEdgeFeature, presentSiteFeature } from '../presenters/map.js';
import { countBySite, listMapEdges, listMapSites } from '../queries/get-map.js';
import { seesSite, unitSourcesOf } from '../queries/narrow-units.js';

const map = { query: mapQuery };
const NONE = { on_hand: 0, en_route: 0, quiet: 0, past_limit: 0 };

/** Sites with counts of what the person may see, and the route graph between them. */
export function mapRoutes(context: Context): Router {
  const { db, clock } = context;
  const router = Router();

  router.get('/map', requireUser(context), validate(map), async (request, response) => {
    const { bbox } = validated(request, map).query;
    const sources = unitSourcesOf(actorOf(request));
    const [sites, edges, counts] = await Promise.all([
      listMapSites(db, bbox),
      listMapEdges(db, bbox),
      countBySite(db, sources, clock.now()),
    ]);
    const countAt = new Map(counts.map((row) => [row.site_id, row]));
    const siteFeatures = sites.map((site) =>
      presentSiteFeature(site, seesSite(sources, site.id) ? (countAt.get(site.id) ?? NONE) : null),
    );
    response.json({
      type: 'FeatureCollection',
      features: [...edges.map(presentEdgeFeature), ...siteFeatures],
    });
  });

  return router;
}

export const mapOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/map',
    summary: 'Show sites with counts of what I may see, and the routes between them, as GeoJSON',
    query: mapQuery,
    response: mapAnswer,
  },
];
