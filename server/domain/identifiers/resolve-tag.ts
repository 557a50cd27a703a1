import { AEI_FORMAT, decodeAei } from './aei.js';
import type { TagSide } from './aei.js';
import { canonicalEpc } from './epc.js';
import { CONTAINER_GROUP, kindOfGroup } from './equipment-groups.js';
import type { EquipmentKind } from './equipment-groups.js';
import { aarIdentity, isAmbiguousMark, isContainerMark, isoIdentity } from './identity.js';
import type { Identity } from './identity.js';
import { parseUnit } from './parse-unit.js';

/** What a tag says by itself, without any configuration. `value` is its normalised form. */
export type ResolvedTag =
  | {
      kind: 'aei';
      value: string;
      groupCode: number;
      identity: Identity;
      side: TagSide;
      equipmentKind: EquipmentKind;
    }
  | { kind: 'text'; value: string; identity: Identity; equipmentKind: EquipmentKind }
  /** Names a unit only when registered. */
  | { kind: 'epc'; value: string }
  | { kind: 'hold'; value: string; hold: TagHold };

/** Reasons to set a read aside that lie in its tag alone. */
export type TagHold = 'undecodable-tag' | 'check-failed' | 'not-equipment';

function hasControlCharacter(text: string): boolean {
  return Array.from(text).some(
    (character) => character < ' ' || (character >= '\u007f' && character <= '\u009f'),
  );
}

function hold(value: string, reason: TagHold): ResolvedTag {
  return { kind: 'hold', value, hold: reason };
}

function identityOnTag(groupCode: number, mark: string, number: number): Identity {
  const isIso = isContainerMark(mark) || (groupCode === CONTAINER_GROUP && isAmbiguousMark(mark));
  return isIso ? isoIdentity(mark, number) : aarIdentity(mark, number);
}

function resolveAei(value: string): ResolvedTag | null {
  const tag = decodeAei(value);
  if (!tag) return null;
  if (tag.formatCode !== AEI_FORMAT) return hold(value, 'undecodable-tag');
  if (!tag.firstCheckSumValid) return hold(value, 'check-failed');
  const { groupCode, initial, number, side } = tag;
  const equipmentKind = kindOfGroup(groupCode);
  if (!equipmentKind) return hold(value, 'not-equipment');
  if (initial === null || number === null) return hold(value, 'undecodable-tag');
  const identity = identityOnTag(groupCode, initial, number);
  return { kind: 'aei', value, groupCode, identity, side, equipmentKind };
}

/** The kind that an identity without a group code lets one expect. */
export function kindOfIdentity({ scheme, mark }: Identity): EquipmentKind {
  if (scheme === 'uic') return 'car';
  if (mark.endsWith('U')) return 'container';
  if (mark.endsWith('Z')) return 'trailer';
  return scheme === 'iso6346' ? 'other' : 'car';
}

function resolveText(value: string): ResolvedTag {
  if (hasControlCharacter(value)) return hold(value, 'undecodable-tag');
  const parsed = parseUnit(value);
  if (parsed.kind === 'unit') {
    const { identity } = parsed;
    return { kind: 'text', value, identity, equipmentKind: kindOfIdentity(identity) };
  }
  const failed = parsed.kind === 'wrong' && parsed.fault === 'check-digit';
  return hold(value, failed ? 'check-failed' : 'undecodable-tag');
}

/**
 * Says what a tag as the reader gave it names: an AEI tag by its frame markers, an EPC by its
 * header, else text already decoded. Never throws, whatever the text.
 */
export function resolveTag(rawTag: string): ResolvedTag {
  const trimmed = rawTag.trim();
  const value = /^[0-9A-Fa-f]+$/.test(trimmed) ? trimmed.toUpperCase() : trimmed;
  const aei = resolveAei(value);
  if (aei) return aei;
  const epc = canonicalEpc(value);
  if (epc !== null) return { kind: 'epc', value: epc };
  return resolveText(value);
}

/** The form in which a tag is stored and compared: trimmed, hex in upper case, EPC unpadded. */
export function normaliseTag(rawTag: string): string {
  return resolveTag(rawTag).value;
}
