import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { AntennaInput } from '../../../lib/wire';

/** Adds an antenna to a read point of its site. */
export const addAntenna = (antenna: AntennaInput): Promise<unknown> =>
  request('POST', api.antennas, { body: antenna });
