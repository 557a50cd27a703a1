/** The `kind` of the interface. */
export type EquipmentKind =
  | 'car'
  | 'locomotive'
  | 'container'
  | 'trailer'
  | 'chassis'
  | 'generatorSet'
  | 'endOfTrain'
  | 'other';

/** The group code of a container tag (ISO 10374). */
export const CONTAINER_GROUP = 10;

const KIND_BY_GROUP: Partial<Record<number, EquipmentKind>> = {
  0: 'other',
  5: 'locomotive',
  6: 'endOfTrain',
  8: 'generatorSet',
  10: 'container',
  17: 'other',
  18: 'other',
  19: 'car',
  21: 'trailer',
  24: 'other',
  27: 'chassis',
};

/**
 * The kind that an AEI equipment group code (0-31) says; null when tags of that group name no
 * equipment (covers, train numbers, markers, dollies, alarms, experiments, reserved codes).
 */
export function kindOfGroup(groupCode: number): EquipmentKind | null {
  return KIND_BY_GROUP[groupCode] ?? null;
}
