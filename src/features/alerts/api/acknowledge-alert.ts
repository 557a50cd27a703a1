import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';

/** Takes an alert: no more mail about it; it stays until it clears. */
export const acknowledgeAlert = (id: number): Promise<unknown> =>
  request('POST', api.alertAct(id, 'acknowledge'));
