import type { EquipmentKind } from '../identifiers/equipment-groups.js';
import { resolveTag } from '../identifiers/resolve-tag.js';
import type { Network, UnitRef } from './configuration.js';
import type { FoldedUnit } from './last-seen.js';
import type { Passage } from './passages.js';
import type { Pass } from './passes.js';
import type { StrayPassage } from './refold-point.js';

/** Of what the passages of each unit say of its kind, the word that counts most. */
export function kindsOf({
  passes,
  strays,
}: {
  passes: ReadonlyMap<number, readonly Pass[]>;
  strays: ReadonlyMap<number, readonly StrayPassage[]>;
}): Map<UnitRef, EquipmentKind> {
  const heard = new Map<UnitRef, Passage>();
  const hear = ({ passage }: { passage: Passage }) => {
    const best = heard.get(passage.unit);
    if (!best || passage.kindRank < best.kindRank) heard.set(passage.unit, passage);
  };
  for (const { members } of [...passes.values()].flat()) members.forEach(hear);
  [...strays.values()].flat().forEach(hear);
  return new Map([...heard].map(([unit, { kind }]) => [unit, kind]));
}

/** The register's word on a unit, else what was read of it, else what its identity lets expect. */
export function foldedUnit(
  network: Network,
  kinds: ReadonlyMap<UnitRef, EquipmentKind>,
  unit: UnitRef,
): FoldedUnit {
  const known = network.unit(unit);
  if (known?.registered) return { kind: known.kind, registered: true };
  return { kind: kinds.get(unit) ?? kindOfIdentity(unit), registered: false };
}

function kindOfIdentity(unit: UnitRef): EquipmentKind {
  const resolved = resolveTag(String(unit));
  return resolved.kind === 'text' ? resolved.equipmentKind : 'other';
}
