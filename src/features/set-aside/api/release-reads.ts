import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';
import type { ReleaseAnswer } from '../../../lib/wire';

/** Releases the reads of a site whose clock was ahead, up to `until` when given; says how many. */
export async function releaseReads(release: {
  site: string;
  until: string | undefined;
}): Promise<number> {
  const body = { code: 'clock-ahead', ...release };
  return (await request<ReleaseAnswer>('POST', api.heldRelease, { body })).data.released;
}
