import { queryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { noteFreshness } from '../../../lib/live';
import { api } from '../../../lib/paths';
import type { FleetSummary } from '../../../lib/wire';

/** The counts of the opening sentence, over everything the person may see. */
export const fleetSummaryQuery = queryOptions({
  queryKey: ['fleet', 'summary'],
  queryFn: async ({ signal }) => {
    const { data } = await get<{ data: FleetSummary }>(api.fleetSummary, {}, signal);
    noteFreshness({ projectorLagMs: data.projectorLagMs });
    return data;
  },
});
