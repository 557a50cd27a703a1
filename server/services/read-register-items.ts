import type { RegisterInput } from '../contract/administration.js';
import type { Identity } from '../domain/identifiers/identity.js';
import { resolveTag, type TagHold } from '../domain/identifiers/resolve-tag.js';
import { batchPointer, type Batch } from '../lib/batch.js';
import type { Faults } from '../lib/faults.js';
import type { Validity } from '../lib/validity.js';
import { readFormerly, type FormerIdentity } from './read-formerly.js';
import { readIdentity } from './read-identity.js';

/** A tag of the register in the form in which reads are compared with it. */
export interface RegisterTag extends Validity {
  value: string;
  side: 'left' | 'right' | null;
}

export interface RegisterItem {
  input: RegisterInput;
  identity: Identity;
  /** undefined: the former identities stay as they are. */
  formerly: FormerIdentity[] | undefined;
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
export function readRegisterItems(
  batch: Batch<RegisterInput>,
  faults: Faults,
  now: Date,
): RegisterItem[] {
  return batch.items.map((input, index) => {
    const at = (...path: PropertyKey[]) => batchPointer(batch, index, ...path);
    const identity = readIdentity(input.unit, faults, at('unit'));
    const formerly = input.formerly && readFormerly(input.formerly, faults, at, now);
    const tags = input.tags?.map((tag, place) =>
      readTag(tag, faults, (name) => at('tags', place, name)),
    );
    const groupCode = tags?.map((tag) => tag.groupCode).find((code) => code !== null) ?? null;
    return { input, identity, formerly, tags, groupCode };
  });
}

/** A tag that came in, normalised; what is wrong with it is added as faults. */
export function readTag(
  tag: NonNullable<RegisterInput['tags']>[number],
  faults: Faults,
  at: (name: 'value' | 'validTo') => string,
): RegisterTag & { groupCode: number | null } {
  const resolved = resolveTag(tag.value);
  const { value } = resolved;
  if (resolved.kind === 'hold') faults.add(at('value'), heldBecause[resolved.hold]);
  else if (Buffer.byteLength(value) > MOST_TAG_BYTES) {
    faults.add(at('value'), `must have at most ${MOST_TAG_BYTES} bytes`);
  }
  const { side = null, validFrom = null, validTo = null } = tag;
  if (validFrom && validTo && validFrom >= validTo) {
    faults.add(at('validTo'), 'must be later than validFrom');
  }
  const groupCode = resolved.kind === 'aei' ? resolved.groupCode : null;
  return { value, side, validFrom, validTo, groupCode };
}
