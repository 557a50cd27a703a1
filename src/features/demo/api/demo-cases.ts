import { queryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { DemoCasesAnswer } from '../../../lib/wire';

/** What the demo shows, and which of its cars this person may open. */
export const demoCasesQuery = queryOptions({
  queryKey: ['demo', 'cases'],
  queryFn: ({ signal }) => get<DemoCasesAnswer>(api.demoCases, {}, signal),
});
