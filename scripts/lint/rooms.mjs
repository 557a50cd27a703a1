import { existsSync, readdirSync } from 'node:fs';
import path from 'node:path';

/**
 * The rooms of the server from the top down; rooms of one row may not import each other, except
 * the last row, which is the floor everybody stands on.
 */
export const serverFloors = [
  ['index', 'rebuild'],
  ['app', 'worker', 'simulator'],
  ['routes'],
  ['middleware', 'jobs'],
  ['ingest'],
  ['projections'],
  ['services'],
  ['queries'],
  ['presenters'],
  ['policies', 'mail', 'smtp-fake'],
  ['models'],
  ['domain'],
  ['contract'],
  ['config', 'lib', 'errors'],
];

export const clientFloors = [['main'], ['app'], ['pages'], ['features'], ['components'], ['lib']];

/** The only server rooms that the client may read: pure, and part of the contract. */
const sharedWithClient = ['server/contract/', 'server/domain/identifiers/'];

/** Rooms that stand in the folders but in no floor: each needs its place before it is used. */
export function unplacedRooms(root) {
  const unplaced = [];
  for (const [side, floors] of [
    ['server', serverFloors],
    ['src', clientFloors],
  ]) {
    if (!existsSync(path.join(root, side))) continue;
    const known = new Set(floors.flat());
    for (const entry of readdirSync(path.join(root, side), { withFileTypes: true })) {
      const isCode = entry.isDirectory() || /\.tsx?$/.test(entry.name);
      const room = entry.name.replace(/\.(d\.)?tsx?$/, '');
      if (isCode && !entry.name.endsWith('.d.ts') && !known.has(room)) {
        unplaced.push(`${side}/${entry.name}`);
      }
    }
  }
  return unplaced;
}

/** Splits a repository path into its side, room and, for features, the noun. */
export function placeOf(file) {
  const [side, room, noun] = file.replace(/\.(d\.)?[cm]?[jt]sx?$/, '').split('/');
  return { side, room: room ?? '', noun: room === 'features' ? noun : undefined };
}

/**
 * Says why `from` may not import `to` (both are repository paths with forward slashes),
 * or null when it may.
 */
export function whyNot(from, to) {
  const a = placeOf(from);
  const b = placeOf(to);
  if (a.side === 'server' && b.side === 'src') {
    return 'The server never imports the client. What both need belongs in server/contract/.';
  }
  if (a.side === 'src' && b.side === 'server') {
    return sharedWithClient.some((start) => to.startsWith(start))
      ? null
      : `src/ may read only ${sharedWithClient.join(' and ')}. Ask the API for it, or move what is pure into one of these.`;
  }
  if (['server', 'src'].includes(a.side) && ['tests', 'bench'].includes(b.side)) {
    return `${a.side}/ never imports ${b.side}/. What both need belongs in the product.`;
  }
  if (a.side !== b.side || !['server', 'src'].includes(a.side)) return null;
  return whyNotWithin(a, b, to);
}

function whyNotWithin(a, b, to) {
  if (a.side === 'server' && a.room === 'contract' && to.startsWith('server/domain/identifiers/')) {
    return null;
  }
  if (a.room === b.room) {
    return a.noun !== b.noun
      ? `The feature "${a.noun}" never imports the feature "${b.noun}". Compose both in src/pages/, or move what they share to src/components/ or src/lib/.`
      : null;
  }
  const floors = a.side === 'server' ? serverFloors : clientFloors;
  const floorOf = (room) => floors.findIndex((floor) => floor.includes(room));
  const [above, below] = [floorOf(a.room), floorOf(b.room)];
  if (above === -1) return `${a.side}/${a.room} has no place among the rooms yet.`;
  if (below === -1) return `${b.side}/${b.room} has no place among the rooms yet.`;
  if (above < below || (above === below && above === floors.length - 1)) return null;
  const allowed = floors.slice(above + 1).flat();
  return `${a.side}/${a.room} imports only rooms below it (${allowed.join(', ') || 'none'}). Let a room above hand it what it needs from ${b.side}/${b.room}, or move that piece down.`;
}
