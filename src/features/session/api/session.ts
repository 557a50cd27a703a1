import { queryOptions } from '@tanstack/react-query';
import { ApiProblem } from '../../../lib/api-problem';
import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { SessionInfo } from '../../../lib/wire';

/** Who is signed in; null when nobody is. */
export const sessionQuery = queryOptions({
  queryKey: ['session'],
  queryFn: ({ signal }) => fetchSession(signal),
  staleTime: 5 * 60_000,
});

async function fetchSession(signal: AbortSignal): Promise<SessionInfo | null> {
  try {
    const answer = await request<{ data: SessionInfo }>('GET', api.session, {
      signal,
      anonymous: true,
    });
    return answer.data;
  } catch (error) {
    if (error instanceof ApiProblem && error.status === 401) return null;
    throw error;
  }
}
