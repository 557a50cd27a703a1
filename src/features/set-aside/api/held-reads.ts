import { infiniteQueryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { HeldReadsAnswer, HoldCode } from '../../../lib/wire';

/** Reads set aside for one reason, at one site or all, latest first, page after page. */
export const heldReadsQuery = (code: HoldCode, site: string | null) =>
  infiniteQueryOptions({
    queryKey: ['set-aside', 'reads', code, site],
    queryFn: ({ pageParam, signal }) =>
      get<HeldReadsAnswer>(api.heldReadList, { code, site, limit: 50, cursor: pageParam }, signal),
    initialPageParam: null as string | null,
    getNextPageParam: (page) => page.next,
  });
