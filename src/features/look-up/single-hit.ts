import { parseUnit } from '../../../server/domain/identifiers/parse-unit';
import type { LookUpHit } from '../../lib/wire';

/**
 * The one hit that Enter opens: the only one, or the only one that carries exactly the number
 * typed (40127 is not 401270), be it since long ago. Null where a person has to choose.
 */
export function singleHit(typed: string, hits: LookUpHit[]): LookUpHit | null {
  const [only, ...others] = hits;
  if (only && others.length === 0) return only;
  const now = hits.filter((hit) => carries(hit.kind, hit.display, typed));
  const once = hits.filter(({ kind, formerly }) => formerly && carries(kind, formerly, typed));
  const [exact, ...alike] = now.length > 0 ? now : once;
  return exact && alike.length === 0 ? exact : null;
}

function carries(kind: LookUpHit['kind'], display: string, typed: string): boolean {
  if (kind === 'site') return display.toLowerCase() === typed.trim().toLowerCase();
  const parsed = parseUnit(typed);
  const own = parseUnit(display);
  if (own.kind !== 'unit') return false;
  if (parsed.kind === 'unit') return parsed.identity.compact === own.identity.compact;
  if (parsed.kind !== 'number') return false;
  return (
    own.identity.number === parsed.digits ||
    own.identity.compact.replace(/\D/g, '') === parsed.digits
  );
}
