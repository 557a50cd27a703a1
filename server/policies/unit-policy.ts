import type { Policy } from './policy.js';

/** What was found out about a person's sight of a unit; null: it does not exist for them. */
export interface UnitSight {
  access: { isListed: boolean } | null;
}

/**
 * Everybody with a role may watch what stands in their lists; a unit that only once was at their
 * site has nothing left that a watch of theirs could be about.
 */
export const unitPolicy: Policy<UnitSight, 'watch'> = {
  see: (_actor, { access }) => access !== null,
  watch: (actor, { access }) => actor.roles.length > 0 && Boolean(access?.isListed),
};
