import { queryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { EquipmentDetailAnswer } from '../../../lib/wire';

/** One car or box whole; a former identity answers with the current one. */
export const unitQuery = (unitId: string) =>
  queryOptions({
    queryKey: ['unit', unitId, 'detail'],
    queryFn: ({ signal }) => get<EquipmentDetailAnswer>(api.equipment(unitId), {}, signal),
  });
