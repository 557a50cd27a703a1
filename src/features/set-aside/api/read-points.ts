import { queryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { ReadPointView } from '../../../lib/wire';

/** The read points of a site, 200 at most. */
export const readPointsQuery = (site: string) =>
  queryOptions({
    queryKey: ['read-points', site],
    queryFn: async ({ signal }) =>
      (await get<{ data: ReadPointView[] }>(api.readPoints, { site, limit: 200 }, signal)).data,
  });
