import { infiniteQueryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { UnitReportsAnswer } from '../../../lib/wire';

/** What was reported of the car by messages and by eye, newest first, page after page. */
export const unitReportsQuery = (unitId: string) =>
  infiniteQueryOptions({
    queryKey: ['unit', unitId, 'reports'],
    queryFn: ({ pageParam, signal }) =>
      get<UnitReportsAnswer>(api.unitReports(unitId), { limit: 10, cursor: pageParam }, signal),
    initialPageParam: null as string | null,
    getNextPageParam: (page) => page.next,
  });
