import { infiniteQueryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { WatchListAnswer } from '../../../lib/wire';

/** Watches of mine and those that tell me, newest first. */
export const watchListQuery = infiniteQueryOptions({
  queryKey: ['watches'],
  queryFn: ({ pageParam, signal }) =>
    get<WatchListAnswer>(api.watches, { limit: 100, cursor: pageParam }, signal),
  initialPageParam: null as string | null,
  getNextPageParam: (page) => page.next,
});
