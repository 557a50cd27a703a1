import { infiniteQueryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { ReadsAnswer } from '../../../lib/wire';

/** The reads as the readers gave them, newest first, page after page. */
export const readsQuery = (unitId: string) =>
  infiniteQueryOptions({
    queryKey: ['unit', unitId, 'reads'],
    queryFn: ({ pageParam, signal }) =>
      get<ReadsAnswer>(api.reads(unitId), { limit: 50, cursor: pageParam }, signal),
    initialPageParam: null as string | null,
    getNextPageParam: (page) => page.next,
  });
