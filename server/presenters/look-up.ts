import type { LookUpHit } from '../contract/look-up.js';

const KIND_WORDS: Record<string, string> = {
  car: 'car',
  locomotive: 'locomotive',
  container: 'box',
  trailer: 'trailer',
  chassis: 'chassis',
  generatorSet: 'generator set',
  endOfTrain: 'end-of-train device',
  other: 'other equipment',
};

export interface HitRecord {
  row: { kind: string; car_type: string | null; owner_name: string | null };
  identities: readonly [
    { compact: string; display: string },
    ...{ compact: string; display: string }[],
  ];
  foundBy: { display: string } | null;
}

/** A car or box; what it is and whose, never where: that is for its own page to say. */
export function presentUnitHit({ row, identities, foundBy }: HitRecord): LookUpHit {
  const [present, ...former] = identities;
  const others = former
    .map((identity) => identity.display)
    .filter((display) => display !== foundBy?.display);
  const parts = [
    row.car_type ?? KIND_WORDS[row.kind] ?? row.kind,
    row.owner_name,
    others.length > 0 ? `formerly ${[...new Set(others)].join(', ')}` : null,
  ];
  return {
    kind: 'equipment',
    id: present.compact,
    display: present.display,
    formerly: foundBy?.display ?? null,
    detail: parts.filter((part) => part !== null).join(', '),
  };
}

/** A site by its name. */
export function presentSiteHit(site: { code: string; name: string; kind: string }): LookUpHit {
  const detail = `${site.code}, ${site.kind}`;
  return { kind: 'site', id: site.code, display: site.name, formerly: null, detail };
}
