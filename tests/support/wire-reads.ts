import { toUSVString } from 'node:util';
import fc from 'fast-check';

/** A read as it stands in a body, and what must become of it. */
export interface WireRead {
  /** JSON, or what stands in its place, on one line. */
  text: string;
  /** Its key in the ledger when it is well formed, else null. */
  key: string | null;
  /** Why it must be rejected; null for a well-formed one. */
  reject: string | null;
}

/** The key of a read in the ledger, as one text. */
export const keyOf = (antenna: number, tag: string, ms: number) =>
  JSON.stringify([antenna, ms, tag]);

/** Reads that are well formed, written in many ways, and reads that are not, each for one reason. */
export function wireReads(now: Date): fc.Arbitrary<WireRead> {
  const sound = soundReads(now);
  const malformed = sound.chain((read) => fc.oneof(spoiled(read), notReads));
  return fc.oneof(
    { weight: 3, arbitrary: sound.map(({ wire }) => wire) },
    { weight: 1, arbitrary: malformed },
  );
}

interface SoundRead {
  wire: WireRead;
  fields: Record<string, string>;
}

function soundReads(now: Date): fc.Arbitrary<SoundRead> {
  const antenna = fc.oneof(fc.constant(1), fc.integer({ min: 1, max: 255 }));
  return fc
    .record({ antenna, tag: tags, time: times(now), extras, odd: fc.nat(6), blank: blanks })
    .map(({ antenna: number, tag, time, extras: more, odd, blank }) => {
      const fields: Record<string, string> = {
        antenna: odd === 1 ? `${number}.0` : odd === 2 ? `${number * 10}e-1` : String(number),
        tag: odd === 3 ? escaped(`${blank}${tag}`) : JSON.stringify(`${blank}${tag}${blank}`),
        readAt: JSON.stringify(time.text),
        ...more,
      };
      // Hex is the same tag in capitals and small letters.
      const kept = /^[0-9a-f]+$/i.test(tag) ? tag.toUpperCase() : tag;
      const key = keyOf(number, kept, time.ms);
      return { wire: { text: written(fields, odd), key, reject: null }, fields };
    });
}

const blanks = fc.constantFrom('', '', ' ', '\t\n', '\u00a0');

/** Any text of 1 to 64 bytes that neither begins nor ends with a blank. */
const tags = fc
  .oneof(
    fc.constantFrom(
      'QTKX 1',
      'ZQXU 305438 1',
      '9F4219400004AA1B9000000000000331',
      "'--",
      'a\u0000',
    ),
    fc.string({ unit: 'binary', minLength: 1, maxLength: 64 }),
    fc.string({ unit: 'grapheme', minLength: 1, maxLength: 20 }),
  )
  .map((text) => toUSVString(text).trim())
  .filter((text) => text !== '' && Buffer.byteLength(text) <= 64);

/** An instant and one of the ways in which RFC 3339 writes it. */
function times(now: Date): fc.Arbitrary<{ ms: number; text: string }> {
  const instants = fc.oneof(
    fc.integer({ min: -20 * 60_000, max: 6 * 60_000 }).map((ms) => now.getTime() + ms),
    fc.integer({ min: Date.UTC(1990, 0, 3), max: Date.UTC(2100, 11, 29) }),
  );
  const offsets = fc.integer({ min: -1439, max: 1439 });
  return fc
    .record({ ms: instants, offset: offsets, style: fc.nat(4), finer: fc.nat(999_999) })
    .map(({ ms, offset, style, finer }) => {
      if (style === 0) return { ms, text: new Date(ms).toISOString() };
      if (style === 1) return { ms, text: new Date(ms).toISOString().toLowerCase() };
      const local = new Date(ms + offset * 60_000).toISOString().slice(0, -1);
      const fraction = style === 2 ? String(finer).padStart(6, '0') : '';
      return { ms, text: `${local}${fraction}${offsetText(offset)}` };
    });
}

function offsetText(minutes: number): string {
  const pad = (value: number) => String(value).padStart(2, '0');
  const size = Math.abs(minutes);
  return `${minutes < 0 ? '-' : '+'}${pad(Math.floor(size / 60))}:${pad(size % 60)}`;
}

/** Further fields of a read: those that are known, with values in their bounds, and any others. */
const extras: fc.Arbitrary<Record<string, string>> = fc
  .record(
    {
      rssi: fc.double({ min: -9_999, max: 9_999, noNaN: true }).map(String),
      count: fc.integer({ min: 0, max: 4_294_967_295 }).map(String),
      more: fc.json({ maxDepth: 3 }),
      proto: fc.constant('{"antenna":7}'),
    },
    { requiredKeys: [] },
  )
  .map(({ proto, ...fields }) =>
    Object.fromEntries([...Object.entries(fields), ...(proto ? [['__proto__', proto]] : [])]),
  );

/** A text of which each character is an escape. */
function escaped(text: string): string {
  const units = Array.from({ length: text.length }, (_, at) => text.charCodeAt(at));
  return `"${units.map((unit) => `\\u${unit.toString(16).padStart(4, '0')}`).join('')}"`;
}

/** An object of fields, in one of several spellings that mean the same. */
function written(fields: Record<string, string>, odd: number): string {
  const entries = Object.entries(fields);
  if (odd === 4) entries.reverse();
  const gap = odd === 5 ? ' \t' : '';
  const parts = entries.map(([name, value]) => `${JSON.stringify(name)}${gap}:${gap}${value}`);
  // A field that comes twice counts as it came last.
  if (odd === 6) parts.unshift('"antenna":"x"', '"tag":[]');
  return `{${gap}${parts.join(`${gap},`)}${gap}}`;
}

/** The read with one thing wrong. */
function spoiled({ fields }: SoundRead): fc.Arbitrary<WireRead> {
  const faults: [string, string, string[]][] = [
    ['missing-antenna', 'antenna', ['null']],
    ['bad-value', 'antenna', ['0', '256', '1.5', '"1"', '-1', '1e400', '[]', 'true']],
    ['missing-tag', 'tag', ['null', '""', '"  "']],
    ['tag-too-long', 'tag', [`"${'x'.repeat(65)}"`, `"${'€'.repeat(22)}"`]],
    ['bad-value', 'tag', ['7', '{}', '"\\ud800"', 'false']],
    ['missing-time', 'readAt', ['null']],
    [
      'invalid-time',
      'readAt',
      ['0', '""', '"2026-12-01T11:00:00"', '"1989-12-31T23:59:59Z"', '[]'],
    ],
    ['bad-value', 'rssi', ['"loud"', '1e400', '10000', '{}']],
    ['bad-value', 'count', ['-1', '1.5', '4294967296', '"3"']],
  ];
  return fc.constantFrom(...faults).chain(([reject, field, values]) =>
    fc.constantFrom(...values).map((value) => ({
      text: written({ ...fields, [field]: value }, 0),
      key: null,
      reject,
    })),
  );
}

const notReads: fc.Arbitrary<WireRead> = fc
  .constantFrom('null', 'true', '0', '"read"', '[]', '[{}]')
  .map((text) => ({ text, key: null, reject: 'not-an-object' }));
