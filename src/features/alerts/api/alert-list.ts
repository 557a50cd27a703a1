import { infiniteQueryOptions, queryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { AlertListAnswer, AlertState } from '../../../lib/wire';

/** What the address of Alerts can say. */
export interface AlertFilter {
  state: AlertState;
  watch?: string | undefined;
}

/** Alerts in one state, latest first, page after page. */
export const alertListQuery = (filter: AlertFilter) =>
  infiniteQueryOptions({
    queryKey: ['alerts', 'list', filter],
    queryFn: ({ pageParam, signal }) =>
      get<AlertListAnswer>(api.alerts, { ...filter, limit: 100, cursor: pageParam }, signal),
    initialPageParam: null as string | null,
    getNextPageParam: (page) => page.next,
  });

/** How many alerts are in a state. */
export const alertCountQuery = (state: AlertState) =>
  queryOptions({
    queryKey: ['alerts', 'count', state],
    queryFn: async ({ signal }) =>
      (await get<AlertListAnswer>(api.alerts, { state, limit: 1 }, signal)).count,
  });
