import { queryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { HeldGroupView, HeldListAnswer } from '../../../lib/wire';

/**
 * What is set aside, by site and reason; asked again every twenty seconds, for no event tells of
 * it, and every two until `quickUntil` (ms), while something that was done takes effect.
 */
export const heldGroupsQuery = (quickUntil = 0) =>
  queryOptions({
    queryKey: ['set-aside', 'groups'],
    queryFn: ({ signal }) => fetchAll(signal),
    refetchInterval: () => (Date.now() < quickUntil ? 2_000 : 20_000),
  });

/** All pages: there are at most as many groups as sites times reasons. */
async function fetchAll(signal: AbortSignal): Promise<Omit<HeldListAnswer, 'next'>> {
  const data: HeldGroupView[] = [];
  for (let cursor: string | null = null; ;) {
    const page: HeldListAnswer = await get(api.heldReads, { limit: 200, cursor }, signal);
    data.push(...page.data);
    if (page.next === null) return { data, counts: page.counts };
    cursor = page.next;
  }
}
