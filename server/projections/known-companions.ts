import type { PoolConnection } from 'mariadb';
import { nobody, type Companions } from '../domain/movements/companions.js';
import type { Network } from '../domain/movements/configuration.js';
import { departureFrom, type Sighting } from '../domain/movements/sighting.js';
import { byKeys } from '../lib/bulk.js';
import type { PassKey } from '../domain/movements/passes.js';
import { passKeyOf, passOfRow } from './changes.js';
import { neighboursOf, type NeighbourRow } from './neighbours.js';

/** A unit of a pass with its sighting before. */
interface Member {
  unitId: number;
  before: NeighbourRow | null;
}

/**
 * The companions of units as far as somebody asked for them. A question that cannot be answered
 * yet is noted; after `learn` it can be.
 */
export class KnownCompanions {
  private readonly passes = new Map<string, Member[]>();
  private readonly asked = new Map<string, PassKey>();
  private readonly asking = new Set<number>();
  private answered = new Set<number>();

  constructor(
    private readonly connection: PoolConnection,
    private readonly network: Network,
  ) {}

  of(unitId: number): Companions {
    return {
      leftFrom: (pass, siteId) => {
        const others = this.othersIn(unitId, pass);
        if (!others) return nobody.leftFrom(pass, siteId);
        const departures = others.flatMap(({ before }) =>
          before ? (departureFrom(this.network, movedOf(before), siteId) ?? []) : [],
        );
        return { others: others.length, departures };
      },
      shared: (one, other) => {
        const [here, there] = [this.othersIn(unitId, one), this.othersIn(unitId, other)];
        const ids = new Set(there?.map((member) => member.unitId));
        return here?.filter((member) => ids.has(member.unitId)).length ?? 0;
      },
    };
  }

  /** Looks up what was asked for since the last time; false when that was nothing. */
  async learn(): Promise<boolean> {
    const keys = [...this.asked.values()];
    this.answered = new Set(this.asking);
    this.asked.clear();
    this.asking.clear();
    if (keys.length === 0) return false;
    const rows = await byKeys<NeighbourRow>(
      this.connection,
      'SELECT * FROM passages WHERE :keys',
      'read_point_id = ? AND pass_started_at = ? AND pass_ordinal = ?',
      keys.map(({ readPointId, startedAt, ordinal }) => [
        readPointId,
        new Date(startedAt),
        ordinal,
      ]),
    );
    const neighbours = await neighboursOf(this.connection, this.network, rows);
    for (const key of keys) this.passes.set(passKeyOf(key), []);
    rows.forEach((row, index) => {
      const key = passOfRow(row);
      const before = neighbours[index]?.before ?? null;
      if (key) this.passes.get(passKeyOf(key))?.push({ unitId: row.unit_id, before });
    });
    return true;
  }

  /** True when the unit asked for something that has been learnt since. */
  lacked(unitId: number): boolean {
    return this.answered.has(unitId);
  }

  private othersIn(unitId: number, pass: PassKey): Member[] | null {
    const members = this.passes.get(passKeyOf(pass));
    if (members) return members.filter((member) => member.unitId !== unitId);
    this.asked.set(passKeyOf(pass), pass);
    this.asking.add(unitId);
    return null;
  }
}

function movedOf(row: NeighbourRow) {
  return {
    readPointId: row.read_point_id,
    firstAt: row.first_at.getTime(),
    lastAt: row.last_at.getTime(),
    role: row.role as Sighting['role'],
    direction: row.direction === 'unknown' ? null : (row.direction as Sighting['direction']),
  };
}
