import { sections, type Section, type SessionAnswer, type User } from '../contract/session.js';
import type { Actor } from '../policies/actor.js';
import { maySeeDoubts } from '../policies/doubt-policy.js';
import { maySeeHeldReads } from '../policies/held-read-policy.js';
import { maySeeRebuilds } from '../policies/rebuild-policy.js';

type Named = { code: string; name: string } | null;

/** Who is signed in, as they see themselves. */
export function presentUser(actor: Actor, organisation: Named): User {
  return {
    id: actor.personId,
    name: actor.name,
    email: actor.email,
    roles: actor.roles,
    organisation: organisation && { code: organisation.code, name: organisation.name },
    timeZone: actor.timeZone,
  };
}

/** The whole answer to "who am I". */
export function presentSession(
  actor: Actor,
  organisation: Named,
  demoMailbox: boolean,
): SessionAnswer['data'] {
  const mayOpen = (section: Section) => {
    if (section === 'setAside') return maySeeHeldReads(actor);
    if (section === 'doubts') return maySeeDoubts(actor);
    return section !== 'rework' || maySeeRebuilds(actor);
  };
  return {
    user: presentUser(actor, organisation),
    sections: sections.filter(mayOpen),
    demoMailbox,
  };
}
