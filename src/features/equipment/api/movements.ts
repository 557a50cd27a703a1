import { keepPreviousData, queryOptions } from '@tanstack/react-query';
import { get } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { MovementsAnswer } from '../../../lib/wire';

/** Stays and legs since an instant, oldest first; null: all that is kept (500 stays at most). */
export const movementsQuery = (unitId: string, from: string | null) =>
  queryOptions({
    queryKey: ['unit', unitId, 'movements', from],
    queryFn: ({ signal }) => get<MovementsAnswer>(api.movements(unitId), { from }, signal),
    placeholderData: keepPreviousData,
  });
