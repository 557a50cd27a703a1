import { capital, listed, sayKind } from '../../lib/words';
import type { WatchView } from '../../lib/wire';

type Said = Pick<WatchView, 'kind' | 'scope' | 'hours' | 'includeOnHand' | 'named'>;

/** What a watch covers: "any box", "QTKX 40127", "any car of QTKX". */
function sayScope({ scope, named }: Said): string {
  if (scope.units) {
    const names = named.units.map(({ display }) => display);
    return names.length > 3 ? `any of ${names.length} cars and boxes` : listed(names, 'or');
  }
  const kinds = scope.kinds?.length
    ? listed(
        scope.kinds.map((kind) => sayKind(kind)),
        'or',
      )
    : 'car or box';
  const marks = scope.marks ? ` marked ${listed(scope.marks, 'or')}` : '';
  const owners = scope.owners
    ? ` of ${listed(
        named.owners.map(({ name }) => name),
        'or',
      )}`
    : '';
  return `any ${kinds}${marks}${owners}`;
}

/** The watch as the sentence that was filled in. */
export function sayWatch(watch: Said): string {
  const names = watch.named.sites.map(({ name }) => name);
  const sites = watch.scope.sites
    ? names.length > 3
      ? `${names.length} chosen sites`
      : listed(names, 'or')
    : null;
  const what = sayScope(watch);
  if (watch.kind === 'dwell') {
    return `${capital(what)} has stood over ${watch.hours} h at ${sites ?? 'any site'}`;
  }
  const standing = watch.includeOnHand ? ', standing at a site or not' : '';
  return `${capital(what)} has not been read for ${watch.hours} h${sites ? `, last read at ${sites}` : ''}${standing}`;
}
