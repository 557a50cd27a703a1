import { infiniteQueryOptions, queryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { DoubtsAnswer, UnitDoubtsAnswer } from '../../../lib/wire';

/** Everybody's sightings that fit no train, the latest first, page after page. */
export const doubtsQuery = infiniteQueryOptions({
  queryKey: ['doubts'],
  queryFn: ({ pageParam, signal }) =>
    get<DoubtsAnswer>(api.doubts, { limit: 100, cursor: pageParam }, signal),
  initialPageParam: null as string | null,
  getNextPageParam: (page) => page.next,
});

/** The latest of one car. */
export const unitDoubtsQuery = (unitId: string) =>
  queryOptions({
    queryKey: ['unit', unitId, 'doubts'],
    queryFn: ({ signal }) => get<UnitDoubtsAnswer>(api.unitDoubts(unitId), { limit: 3 }, signal),
  });
