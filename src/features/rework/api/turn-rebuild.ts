import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';

/** Stops a rebuild, or lets a stopped one go on. */
export const turnRebuild = (id: number, act: 'stop' | 'resume'): Promise<unknown> =>
  request('POST', api.rebuildAct(id, act));
