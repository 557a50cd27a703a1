import { describe, expect, it } from 'vitest';
import { decodeAei } from '../../server/domain/identifiers/aei.js';
import { resolveTag } from '../../server/domain/identifiers/resolve-tag.js';
import { world } from '../../server/simulator/world.js';

describe('the invented register', () => {
  it('has some 900 cars and 400 boxes, and as many strangers', () => {
    const count = (kind: string, isOurs: boolean) =>
      world.units.filter((unit) => unit.kind === kind && (unit.owner !== null) === isOurs).length;
    const ofBranch = world.units.filter(({ flow, kind }) => flow === 'branch' && kind === 'car');
    expect(ofBranch).toHaveLength(21);
    expect(count('car', true)).toBe(900 + ofBranch.length);
    expect(count('container', true)).toBe(400);
    expect(count('car', false)).toBe(900);
    expect(count('container', false)).toBe(400);
  });

  it('marks everything as nobody’s', () => {
    for (const { identity, kind } of world.units) {
      expect(identity.mark).toMatch(kind === 'container' ? /^ZQ[A-Z]U$/ : /^Q[A-Z]{1,3}$/);
    }
    const privateCars = world.units.filter((unit) => unit.kind === 'car' && unit.owner !== null);
    for (const { identity, owner } of privateCars) {
      expect(identity.mark.endsWith('X')).toBe(owner !== 'QUERNWICK');
    }
    expect(new Set(world.units.map(({ identity }) => identity.compact)).size).toBe(
      world.units.length,
    );
    expect(new Set(world.units.flatMap(({ tags }) => tags.map(({ value }) => value))).size).toBe(
      world.units.flatMap(({ tags }) => tags).length,
    );
  });

  it('gives every AEI tag the mark, number and side of its unit', () => {
    for (const { identity, groupCode, tags } of world.units) {
      for (const { value, side } of tags) {
        const tag = decodeAei(value);
        if (!tag) continue;
        expect(tag).toMatchObject({ groupCode, initial: identity.mark, firstCheckSumValid: true });
        expect(tag.number).toBe(Number(identity.number));
        if (side) expect(tag.side).toBe(side);
      }
    }
  });

  it('has some EPC tags, so that a unit is found by its registered tag alone', () => {
    const epcs = world.units.filter(({ tags }) => tags.some(({ value }) => !decodeAei(value)));
    expect(epcs.filter(({ owner }) => owner !== null)).toHaveLength(52);
    for (const { tags } of epcs) {
      for (const { value } of tags) expect(resolveTag(value)).toEqual({ kind: 'epc', value });
    }
  });
});

describe('the invented network', () => {
  it('is about 1,400 rail miles, no edge shorter than the great circle', () => {
    const metres = world.edges.reduce((sum, edge) => sum + edge.railMetres, 0);
    expect(metres / 1609.344).toBeGreaterThan(1_350);
    expect(metres / 1609.344).toBeLessThan(1_550);
    const at = new Map(world.nodes.map((node) => [node.code, node]));
    for (const { from, to, railMetres } of world.edges) {
      const [a, b] = [at.get(from), at.get(to)];
      expect(a && b && greatCircleMetres(a, b)).toBeLessThan(railMetres);
    }
  });

  it('has all four kinds of read points, and its people at real sites', () => {
    const kinds = new Set(world.readPoints.map(({ equipment }) => equipment));
    expect(kinds).toEqual(new Set(['sensors', 'twoOffsets', 'oneOffset', 'single']));
    const codes = new Set<string>(world.sites.map(({ code }) => code));
    const single = world.readPoints.filter(({ equipment }) => equipment === 'single');
    expect(single.map(({ antennas }) => antennas.length)).toEqual([1]);
    const named = world.people.flatMap(({ sites }) => sites);
    expect(named.filter((code) => !codes.has(code))).toEqual([]);
  });

  it('has a site with a lead that is not equipped, one without a reader, and parallel tracks', () => {
    const unequipped = world.sites.filter(({ leads }) => leads.some(({ equipped }) => !equipped));
    expect(unequipped.map(({ code }) => code)).toEqual(['SORREL']);
    const read = new Set(world.readPoints.map(({ site }) => site));
    expect(world.sites.filter(({ code }) => !read.has(code)).map(({ code }) => code)).toEqual([
      'BRYONY',
    ]);
    const [first, second] = world.readPoints.filter(({ site }) => site === 'SORREL');
    expect(first).toMatchObject({ decreasingPlace: null, increasingPlace: 'SORREL' });
    expect(second).toMatchObject({ decreasingPlace: null, increasingPlace: 'SORREL' });
    expect(first?.track).not.toBe(second?.track);
  });

  it('knows on every side of a line read point what lies next, but for lines out of the region', () => {
    const nodes = new Set<string>(world.nodes.map(({ code }) => code));
    const blind: string[] = [];
    for (const point of world.readPoints) {
      const { site, code, decreasingPlace, increasingPlace } = point;
      const { decreasing, increasing } = world.towardOf(point);
      expect([...decreasing, ...increasing].filter((node) => !nodes.has(node))).toEqual([]);
      for (const [place, lines] of [
        [decreasingPlace, decreasing],
        [increasingPlace, increasing],
      ] as const) {
        if (place !== null) expect(lines).toEqual([]);
        else if (lines.length === 0) blind.push(`${site} ${code}`);
      }
    }
    expect(blind).toEqual(['BITTERN X', 'FALLOW X']);
  });

  it('dates the tag that changed cars, and knows nothing of the other', () => {
    const now = Date.UTC(2026, 1, 23);
    const spells = world.tagSpellsAt(now);
    const dated = spells.filter(({ validFrom, validTo }) => validFrom !== null || validTo !== null);
    expect(dated).toHaveLength(2);
    const [before, after] = dated;
    expect(before?.value).toBe(after?.value);
    expect(before?.validTo).toBe(after?.validFrom);
    expect(new Set([before?.unit, after?.unit])).toEqual(new Set(['QTKX40401', 'QTKX40402']));
    expect(now - (before?.validTo ?? 0)).toBeLessThan(45 * 86_400_000);
    const { robbed } = world.branchCars;
    expect(spells.filter(({ unit }) => unit === robbed)).toHaveLength(2);
  });
});

interface Position {
  latitude: number;
  longitude: number;
}

/** Haversine (Sinnott 1984) on a sphere of 6,371 km. */
function greatCircleMetres(a: Position, b: Position): number {
  const radians = Math.PI / 180;
  const [dLat, dLon] = [(b.latitude - a.latitude) * radians, (b.longitude - a.longitude) * radians];
  const h =
    Math.sin(dLat / 2) ** 2 +
    Math.cos(a.latitude * radians) * Math.cos(b.latitude * radians) * Math.sin(dLon / 2) ** 2;
  return 2 * 6_371_000 * Math.asin(Math.sqrt(h));
}
