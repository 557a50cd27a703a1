import { keepPreviousData, queryOptions } from '@tanstack/react-query';
import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { WatchPreviewAnswer, WatchPreviewInput } from '../../../lib/wire';

/** How much a watch would cover and raise now; null while the form does not make one. */
export const watchPreviewQuery = (input: WatchPreviewInput | null) =>
  queryOptions({
    queryKey: ['watch-preview', input],
    queryFn: async ({ signal }) =>
      (await request<WatchPreviewAnswer>('POST', api.watchPreview, { body: input, signal })).data,
    enabled: input !== null,
    placeholderData: keepPreviousData,
  });
