import { queryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { LookUpReply } from '../../../lib/wire';

/** What a typed text may mean, narrowed to what the person may see. */
export const lookUpQuery = (typed: string) =>
  queryOptions({
    queryKey: ['look-up', typed],
    queryFn: async ({ signal }) => (await get<LookUpReply>(api.lookUp, { q: typed }, signal)).data,
    enabled: typed !== '',
  });
