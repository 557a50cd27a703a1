import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { WatchInput } from '../../../lib/wire';

/** Asks to be told, or changes what was asked (`id`); a watch keeps its kind. */
export const saveWatch = (id: number | null, input: WatchInput): Promise<unknown> => {
  if (id === null) return request('POST', api.watches, { body: input });
  const { kind: _kind, ...change } = input;
  return request('PATCH', api.watch(id), { body: change });
};
