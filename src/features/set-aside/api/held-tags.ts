import { infiniteQueryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { HeldTagsAnswer, HoldCode } from '../../../lib/wire';

/** Tags whose reads are set aside for one reason, page after page. */
export const heldTagsQuery = (code: HoldCode) =>
  infiniteQueryOptions({
    queryKey: ['set-aside', 'tags', code],
    queryFn: ({ pageParam, signal }) =>
      get<HeldTagsAnswer>(api.heldTags, { code, limit: 50, cursor: pageParam }, signal),
    initialPageParam: null as string | null,
    getNextPageParam: (page) => page.next,
  });
