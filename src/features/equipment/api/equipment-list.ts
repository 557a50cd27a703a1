import { infiniteQueryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { FleetFilter } from '../../../lib/paths';
import type { EquipmentListAnswer } from '../../../lib/wire';

const rowsAPage = 100;

/** The fleet under a filter, page after page. */
export const equipmentListQuery = (filter: Partial<FleetFilter>) =>
  infiniteQueryOptions({
    queryKey: ['equipment', filter],
    queryFn: ({ pageParam, signal }) =>
      get<EquipmentListAnswer>(
        api.equipmentList,
        { ...filter, limit: rowsAPage, cursor: pageParam },
        signal,
      ),
    initialPageParam: null as string | null,
    getNextPageParam: (page) => page.next,
  });
