import { resolveTag } from '../domain/identifiers/resolve-tag.js';
import { byKeys } from '../lib/bulk.js';
import type { Runs } from '../lib/connection-of.js';
import { begin, end, type Validity } from '../lib/validity.js';
import type { NamingChange } from './naming-change.js';

interface NamingRow {
  value: string | Buffer;
  unit_id: number;
  valid_from: Date | null;
  valid_to: Date | null;
}

type Holding = Validity & { unitId: number };

/** Whom some tags and numbers name at which time, as the transaction sees it. */
export class Holders {
  private readonly tags = new Map<string, Holding[]>();

  constructor(
    private readonly numbers: ReadonlyMap<string, Holding[]>,
    /** Units that the projector makes of numbers that nobody else carries. */
    private readonly keys: ReadonlyMap<string, number>,
  ) {}

  /** Takes in what the register says of these tags, each once. */
  async learnTags(connection: Runs, values: readonly string[]): Promise<void> {
    const unknown = [...new Set(values)].filter((value) => !this.tags.has(value));
    for (const value of unknown) this.tags.set(value, []);
    const rows = await byKeys<NamingRow>(
      connection,
      'SELECT value, unit_id, valid_from, valid_to FROM tags WHERE :keys ORDER BY id',
      'value = ?',
      unknown.map((value) => [Buffer.from(value)]),
    );
    for (const row of rows) this.tags.get(String(row.value))?.push(holdingOf(row));
  }

  /** The unit that a read of this tag at this instant (ms) names; null when none. */
  holderOf(tag: string, at: number): number | null {
    const registered = holderAt(this.tags.get(tag) ?? [], at);
    if (registered !== null) return registered;
    const number = numberOn(tag);
    if (number === null) return null;
    return holderAt(this.numbers.get(number) ?? [], at) ?? this.keys.get(number) ?? null;
  }

  /** Every unit that a tag or number names at any time, by itself or by the number on it. */
  everHolding(value: string): number[] {
    const keyed = this.keys.get(numberOn(value) ?? value);
    const named = this.holdingsOf(value).map(({ unitId }) => unitId);
    return keyed === undefined ? named : [...named, keyed];
  }

  /** True when one entry alone has the tag or number name that unit all through the change. */
  namesAlways(change: NamingChange, unitId: number): boolean {
    return this.holdingsOf(change.value).some(
      (holding) =>
        holding.unitId === unitId && begin(holding) <= begin(change) && end(change) <= end(holding),
    );
  }

  private holdingsOf(value: string): Holding[] {
    const number = numberOn(value) ?? value;
    return [...(this.tags.get(value) ?? []), ...(this.numbers.get(number) ?? [])];
  }
}

/** What the register says of these tags and numbers (compact forms). */
export async function loadHolders(
  connection: Runs,
  tags: readonly string[],
  numbers: readonly string[],
): Promise<Holders> {
  const asked = [...new Set(numbers)].map((value) => [value]);
  const named = await byKeys<NamingRow>(
    connection,
    `SELECT compact AS value, unit_id, valid_from, valid_to FROM identities
     WHERE :keys ORDER BY id`,
    'compact = ?',
    asked,
  );
  const keyed = await byKeys<{ unit_key: string; id: number }>(
    connection,
    'SELECT unit_key, id FROM units WHERE :keys',
    'unit_key = ?',
    asked,
  );
  const byNumber = new Map<string, Holding[]>();
  for (const row of named) {
    const value = String(row.value);
    byNumber.set(value, [...(byNumber.get(value) ?? []), holdingOf(row)]);
  }
  const holders = new Holders(byNumber, new Map(keyed.map((row) => [row.unit_key, row.id])));
  await holders.learnTags(connection, tags);
  return holders;
}

function holdingOf(row: NamingRow): Holding {
  return { unitId: row.unit_id, validFrom: row.valid_from, validTo: row.valid_to };
}

function numberOn(tag: string): string | null {
  const resolved = resolveTag(tag);
  return 'identity' in resolved ? resolved.identity.compact : null;
}

/** Of several that hold at once the one that began last, as reads are taken. */
function holderAt(holdings: readonly Holding[], at: number): number | null {
  let holder: Holding | undefined;
  for (const holding of holdings) {
    if (at < begin(holding) || at >= end(holding)) continue;
    if (!holder || begin(holding) > begin(holder)) holder = holding;
  }
  return holder?.unitId ?? null;
}
