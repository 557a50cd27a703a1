import {
  MOST_REFERENCE,
  reportEvents,
  type ReportEvent,
  type ReportProblemCode,
} from '../contract/movement-reports.js';
import { parseUnit } from '../domain/identifiers/parse-unit.js';
import type { DoorClock } from './hold-of.js';
import { parseInstant } from '../contract/parse-instant.js';

/** A report that will be stored if its site is known; `index` is its place in the request. */
export interface SoundReport {
  index: number;
  reference: string;
  /** Compact identity. */
  unit: string;
  event: ReportEvent;
  atMs: number;
  site: string;
}

export interface ReportProblem {
  index: number;
  code: ReportProblemCode;
  detail: string;
}

const required = [
  ['reference', 'missing-reference'],
  ['unit', 'missing-unit'],
  ['event', 'missing-event'],
  ['at', 'missing-time'],
  ['site', 'missing-site'],
] as const;
type Fields = Record<(typeof required)[number][0], string>;

/** Takes a report as it came apart into its values, or says the first thing that is wrong with it. */
export function judgeReport(
  raw: unknown,
  index: number,
  clock: DoorClock,
): SoundReport | ReportProblem {
  const problem = (code: ReportProblemCode, detail: string) => ({ index, code, detail });
  if (typeof raw !== 'object' || raw === null || Array.isArray(raw)) {
    return problem('not-an-object', 'A report has reference, unit, event, at and site.');
  }
  const fields = {} as Fields;
  for (const [name, missing] of required) {
    const value = (raw as Record<string, unknown>)[name];
    const text = typeof value === 'string' ? value.trim() : value;
    if (text == null || text === '') return problem(missing, `${name} is missing.`);
    if (typeof text !== 'string') return problem('bad-value', `${name} must be text.`);
    fields[name] = text;
  }
  const fault = faultOfReference(fields.reference);
  if (fault !== null) return problem('bad-value', fault);
  const parsed = parseUnit(fields.unit);
  if (parsed.kind === 'wrong') return problem('not-a-unit', parsed.detail);
  if (parsed.kind === 'number') return problem('not-a-unit', NO_MARK);
  if (!isEvent(fields.event)) return problem('unknown-event', UNKNOWN_EVENT);
  const atMs = parseInstant(fields.at);
  if (atMs === null) return problem('invalid-time', INVALID_TIME);
  const code = faultOfTime(atMs, clock);
  if (code !== null) return problem(code, timeDetails[code]);
  const { reference, event, site } = fields;
  return { index, reference, unit: parsed.identity.compact, event, atMs, site };
}

const NO_MARK = 'A number alone names nothing: write the mark too.';
const UNKNOWN_EVENT = `event must be one of ${reportEvents.join(', ')}.`;
const INVALID_TIME = 'at must be an RFC 3339 time with an offset, in the years 1990 to 2100.';

function faultOfReference(reference: string): string | null {
  if (reference.length > MOST_REFERENCE) {
    return `reference has more than ${MOST_REFERENCE} characters.`;
  }
  return /[\p{Cc}\p{Surrogate}]/u.test(reference)
    ? 'reference holds a control character or half a character.'
    : null;
}

const isEvent = (text: string): text is ReportEvent =>
  (reportEvents as readonly string[]).includes(text);

/**
 * Why a report made by people or their systems is not taken for its time, or null. Nothing older
 * than the retained months is: what stands before them is frozen.
 */
export function faultOfTime(atMs: number, clock: DoorClock): 'clock-ahead' | 'too-old' | null {
  if (atMs > clock.latestMs) return 'clock-ahead';
  return atMs < clock.earliestMs ? 'too-old' : null;
}

/** The sentences that go with `faultOfTime`. */
export const timeDetails = {
  'clock-ahead': 'The time is more than five minutes ahead.',
  'too-old': 'The time is before the months that history is kept open for.',
};
