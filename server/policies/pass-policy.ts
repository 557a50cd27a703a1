import type { Policy } from './policy.js';

/** How many of a pass's units a person may name; null: all, because they work where it was. */
export interface PassSight {
  named: number | null;
}

/** Who may name none of its units has no business with it. */
export const passPolicy: Policy<PassSight> = {
  see: (_actor, { named }) => named === null || named > 0,
};
