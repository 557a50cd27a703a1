import type { RegisterInput } from '../contract/administration.js';
import type { Identity } from '../domain/identifiers/identity.js';
import { parseUnit } from '../domain/identifiers/parse-unit.js';
import { resolveTag, type TagHold } from '../domain/identifiers/resolve-tag.js';
import { batchPointer, type Batch } from '../lib/batch.js';
import type { Faults } from '../lib/faults.js';

/** A tag of the register in the form in which reads are compared with it. */
export interface RegisterTag {
  value: string;
  side: 'left' | 'right' | null;
  validFrom: Date | null;
  validTo: Date | null;
}

export interface RegisterItem {
  input: RegisterInput;
  identity: Identity;
  /** undefined: the tags stay as they are. */
  tags: RegisterTag[] | undefined;
  /** As its AEI tags say; null when they do not. */
  groupCode: number | null;
}

const MOST_TAG_BYTES = 64;
const heldBecause: Record<TagHold, string> = {
  'undecodable-tag': 'is no tag that decodes, and no number of a car or box',
  'check-failed': 'fails its check',
  'not-equipment': 'is a tag that names no car, box or locomotive',
};

/** Reads marks, numbers and tags; faults are added, and their items stand in with what was given. */
export function readRegisterItems(batch: Batch<RegisterInput>, faults: Faults): RegisterItem[] {
  return batch.items.map((input, index) => {
    const at: PointerTo = (...path) => batchPointer(batch, index, ...path);
    const identity = readIdentity(input.unit, faults, at('unit'));
    const tags = input.tags?.map((tag, place) => readTag(tag, faults, at, place));
    const groupCode = tags?.map((tag) => tag.groupCode).find((code) => code !== null) ?? null;
    return { input, identity, tags, groupCode };
  });
}

type PointerTo = (...path: PropertyKey[]) => string;

function readIdentity(text: string, faults: Faults, pointer: string): Identity {
  const parsed = parseUnit(text);
  if (parsed.kind === 'unit') return parsed.identity;
  const detail = parsed.kind === 'number' ? 'Write the mark before the number.' : parsed.detail;
  faults.add(pointer, detail);
  return { compact: text, scheme: 'aar', mark: '', number: '', display: text };
}

function readTag(
  tag: NonNullable<RegisterInput['tags']>[number],
  faults: Faults,
  at: PointerTo,
  place: number,
): RegisterTag & { groupCode: number | null } {
  const resolved = resolveTag(tag.value);
  const { value } = resolved;
  if (resolved.kind === 'hold') faults.add(at('tags', place, 'value'), heldBecause[resolved.hold]);
  else if (Buffer.byteLength(value) > MOST_TAG_BYTES) {
    faults.add(at('tags', place, 'value'), `must have at most ${MOST_TAG_BYTES} bytes`);
  }
  const { side = null, validFrom = null, validTo = null } = tag;
  if (validFrom && validTo && validFrom >= validTo) {
    faults.add(at('tags', place, 'validTo'), 'must be later than validFrom');
  }
  const groupCode = resolved.kind === 'aei' ? resolved.groupCode : null;
  return { value, side, validFrom, validTo, groupCode };
}
