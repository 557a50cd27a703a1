import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';

/** Ends a watch; its open alerts clear. */
export const deleteWatch = (id: number): Promise<unknown> => request('DELETE', api.watch(id));
