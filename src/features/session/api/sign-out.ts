import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';

/** Ends the session; one that has ended already counts as done. */
export const signOut = (): Promise<unknown> =>
  request('DELETE', api.session, { anonymous: true }).catch(() => undefined);
