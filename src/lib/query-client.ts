import { QueryCache, QueryClient } from '@tanstack/react-query';
import { isFinal } from './api-client';
import { ApiProblem } from './api-problem';
import { noteAnswer, noteNoAnswer } from './live';

/** One client a window. Answers stay fresh until an event or a poll says otherwise. */
export function createQueryClient(): QueryClient {
  return new QueryClient({
    queryCache: new QueryCache({
      onSuccess: noteAnswer,
      onError: (error) => {
        if (error instanceof ApiProblem && error.status === 0) noteNoAnswer();
      },
    }),
    defaultOptions: {
      queries: {
        staleTime: 15_000,
        // The browser's word for being offline is not asked: a request that fails says it better.
        networkMode: 'always',
        refetchOnWindowFocus: true,
        retry: (failures, error) => !isFinal(error) && failures < 2,
      },
      mutations: { retry: false, networkMode: 'always' },
    },
  });
}
