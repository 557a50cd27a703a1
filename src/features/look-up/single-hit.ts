import { parseUnit } from '../../../server/domain/identifiers/parse-unit';
import type { LookUpHit } from '../../lib/wire';

/**
 * The one hit that Enter opens: the only one, or the only one that carries exactly the number
 * typed (40127 is not 401270). Null where a person has to choose.
 */
export function singleHit(typed: string, hits: LookUpHit[]): LookUpHit | null {
  const [only, ...others] = hits;
  if (only && others.length === 0) return only;
  const [exact, ...alike] = hits.filter((hit) => carries(hit, typed));
  return exact && alike.length === 0 ? exact : null;
}

function carries(hit: LookUpHit, typed: string): boolean {
  if (hit.kind === 'site') return hit.display.toLowerCase() === typed.trim().toLowerCase();
  const parsed = parseUnit(typed);
  if (parsed.kind === 'unit') return parsed.identity.compact === hit.id;
  const own = parseUnit(hit.display);
  if (parsed.kind !== 'number' || own.kind !== 'unit') return false;
  return (
    own.identity.number === parsed.digits ||
    own.identity.compact.replace(/\D/g, '') === parsed.digits
  );
}
