import { infiniteQueryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { SightingsAnswer } from '../../../lib/wire';

/** Every pass that the car was seen in, newest first, page after page. */
export const sightingsQuery = (unitId: string) =>
  infiniteQueryOptions({
    queryKey: ['unit', unitId, 'sightings'],
    queryFn: ({ pageParam, signal }) =>
      get<SightingsAnswer>(api.sightings(unitId), { limit: 10, cursor: pageParam }, signal),
    initialPageParam: null as string | null,
    getNextPageParam: (page) => page.next,
  });
