import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';

/** Opens a session; the cookie comes with the answer. Throws `ApiProblem` 401 or 429. */
export const signIn = (body: { email: string; password: string }): Promise<unknown> =>
  request('POST', api.session, { body, anonymous: true });
