import { request } from '../../../lib/api-client';
import { api } from '../../../lib/paths';

/** What is said of a tag when it is put on a car or box of the register. */
export interface PutTag {
  value: string;
  side: 'left' | 'right' | null;
  /** From when on it is worn. */
  validFrom: string;
}

/** Says that a registered car or box wears a tag. */
export const putTag = (unitId: string, tag: PutTag): Promise<unknown> =>
  request('POST', api.registerTags(unitId), { body: tag });
