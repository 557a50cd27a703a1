import { queryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { EdgeFeature, MapAnswer, SiteFeature } from '../../../lib/wire';

/** Sites with the counts of what the person may see, and the route graph. */
export const mapQuery = queryOptions({
  queryKey: ['map'],
  queryFn: async ({ signal }) => splitFeatures(await get<MapAnswer>(api.map, {}, signal)),
});

/** The features by what they are. */
export function splitFeatures({ features }: MapAnswer) {
  const isSite = (feature: SiteFeature | EdgeFeature): feature is SiteFeature =>
    feature.properties.feature === 'site';
  const isEdge = (feature: SiteFeature | EdgeFeature): feature is EdgeFeature => !isSite(feature);
  return {
    sites: features.filter(isSite).map(({ geometry: { coordinates }, properties }) => ({
      ...properties,
      longitude: coordinates[0],
      latitude: coordinates[1],
    })),
    routes: features.filter(isEdge).map(({ id, geometry, properties }) => ({
      id,
      points: geometry.coordinates,
      railMetres: properties.railMetres,
      kind: properties.kind,
    })),
  };
}
