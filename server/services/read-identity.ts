import type { Identity } from '../domain/identifiers/identity.js';
import { parseUnit } from '../domain/identifiers/parse-unit.js';
import type { Faults } from '../lib/faults.js';

/** The identity that a text names; a fault is added for one that names none, and it stands in. */
export function readIdentity(text: string, faults: Faults, pointer: string): Identity {
  const parsed = parseUnit(text);
  if (parsed.kind === 'unit') return parsed.identity;
  const detail = parsed.kind === 'number' ? 'Write the mark before the number.' : parsed.detail;
  faults.add(pointer, detail);
  return { compact: text, scheme: 'aar', mark: '', number: '', display: text };
}
