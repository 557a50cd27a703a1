import { infiniteQueryOptions, queryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { RebuildListAnswer, RebuildState, RebuildView } from '../../../lib/wire';

const OFTEN_MS = 2_000;
const SELDOM_MS = 20_000;

/**
 * No event tells of it: looked at often while something moves, else now and then. Never by itself
 * after a fault with nothing to show: that would blink.
 */
function untilNext(rows: readonly RebuildView[] | undefined): number | false {
  if (!rows) return false;
  const moves = rows.some(({ state }) => state === 'running' || state === 'waiting');
  return moves ? OFTEN_MS : SELDOM_MS;
}

/** Everything that was or is made anew, newest first, page after page. */
export const rebuildListQuery = infiniteQueryOptions({
  queryKey: ['rebuilds', 'list'],
  queryFn: ({ pageParam, signal }) =>
    get<RebuildListAnswer>(api.rebuilds, { limit: 50, cursor: pageParam }, signal),
  initialPageParam: null as string | null,
  getNextPageParam: (page) => page.next,
  refetchInterval: ({ state }) => untilNext(state.data?.pages.flatMap(({ data }) => data)),
});

/** Those in one state, newest first; `more` when there are more than these. */
export const rebuildsInQuery = (state: RebuildState) =>
  queryOptions({
    queryKey: ['rebuilds', 'in', state],
    queryFn: async ({ signal }) => {
      const page = await get<RebuildListAnswer>(api.rebuilds, { state, limit: 200 }, signal);
      return { rows: page.data, more: page.next !== null };
    },
    refetchInterval: (query) => (query.state.data ? OFTEN_MS : false),
  });
