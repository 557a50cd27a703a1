import { encodeAei } from '../../domain/identifiers/aei.js';
import { between, normal, wholeBetween, type Random } from '../random.js';
import type { DemoTag } from '../world/equipment.js';
import type { DemoAntenna, DemoReadPoint } from '../world/read-points.js';
import { crossings, metresAt, type Motion } from './motion.js';
import { placesOf, type Pass, type Vehicle } from './pass.js';

/** One report of one tag, by the site's true time. */
export interface RawRead {
  antenna: number;
  tag: string;
  /** Milliseconds of the epoch, true time. */
  at: number;
  rssi: number;
}

type Hand = 'left' | 'right';

/** A tag on the train: metres behind the head, and the hand of travel that it shows to. */
interface Fixed {
  tag: string;
  behindM: number;
  hand: Hand | 'both';
}

/** Common practice: a tag sits two or three metres from the end. */
const FROM_END_M = 2.4;
/** Half the length of track over which an antenna hears a tag. */
const BEAM_M = 1.3;
const JITTER_MS = 15;
const READS_A_SECOND = 1.8;
/** Share of passages of a living tag that an antenna misses. */
const MISSED = 0.006;
/** Share of reads whose tag came over the air with a wrong bit. */
const GARBLED = 0.0003;
const STANDING_EVERY_S = 20;
const STANDING_MOST = 12;

/** Every read of a pass, unsorted. */
export function renderReads(random: Random, pass: Pass): RawRead[] {
  const tags = fixedTags(pass);
  return pass.point.antennas.flatMap((antenna) => {
    const heard = handOf(antenna, pass);
    return tags
      .filter(({ hand }) => hand === 'both' || hand === heard)
      .flatMap((tag) => readsOf(random, pass, antenna, tag));
  });
}

/** Share of its reads that the next track's antennas hear too, the nearer side alone. */
const FAINT = 0.25;

/** What the antennas of the next track hear of a pass: no tag more than once an antenna. */
export function renderFaint(random: Random, pass: Pass, point: DemoReadPoint): RawRead[] {
  const side = point.code > pass.point.code ? 'right' : 'left';
  const antennas = point.antennas.filter((antenna) => antenna.side === side);
  const heard = new Set<string>();
  return renderReads(random, { ...pass, point: { ...point, antennas } }).filter((read) => {
    const key = `${read.antenna} ${read.tag}`;
    if (random() >= FAINT || heard.has(key)) return false;
    heard.add(key);
    read.rssi -= 22;
    return true;
  });
}

/** The hand of travel on which an antenna stands. */
function handOf({ side }: DemoAntenna, { direction }: Pass): Hand {
  if (direction === 'increasing') return side;
  return side === 'left' ? 'right' : 'left';
}

function fixedTags(pass: Pass): Fixed[] {
  const places = placesOf(pass.vehicles);
  const tags = pass.vehicles.flatMap((vehicle, index) => tagsOn(vehicle, places[index] ?? 0));
  if (pass.trainNumber === null) return tags;
  return [...tags, { tag: trainTag(pass.trainNumber), behindM: 4, hand: 'right' }];
}

/** A train number tag (group 4) names no equipment; some engines carry one. */
function trainTag(number: number): string {
  return encodeAei({ groupCode: 4, initial: 'QWKR', number, side: 'right' });
}

function tagsOn({ unit, bLeads, loads, tags = unit.tags }: Vehicle, place: number): Fixed[] {
  const length = unit.lengthDm / 10;
  const own = tags.filter(({ dead }) => !dead).map((tag) => tagOn(tag, length, bLeads, place));
  const boxes = loads.flatMap((load) =>
    load.unit.tags
      .filter(({ dead }) => !dead)
      .map(({ value }) => ({ tag: value, behindM: place + load.behindM, hand: load.hand })),
  );
  return [...own, ...boxes];
}

/**
 * Right tag near the B-end, left tag near the other. With the B-end (R-end) leading the left tag
 * shows to the right hand of travel.
 */
function tagOn({ value, side }: DemoTag, length: number, bLeads: boolean, place: number): Fixed {
  if (side === null) return { tag: value, behindM: place + length / 2, hand: 'both' };
  const isAhead = (side === 'right') === bLeads;
  const behindM = place + (isAhead ? FROM_END_M : length - FROM_END_M);
  const hand = (side === 'left') === bLeads ? 'right' : 'left';
  return { tag: value, behindM, hand };
}

function readsOf(random: Random, pass: Pass, antenna: DemoAntenna, fixed: Fixed): RawRead[] {
  const ahead = pass.direction === 'increasing' ? antenna.offsetM : -antenna.offsetM;
  const target = ahead + fixed.behindM;
  const rolling = crossings(pass.motion, target).flatMap(({ at, speed }) =>
    random() < MISSED ? [] : momentsAround(random, at, Math.abs(speed)),
  );
  const moments = [...rolling, ...momentsStanding(random, pass.motion, target)];
  return moments.map((seconds) => ({
    antenna: antenna.number,
    tag: random() < GARBLED ? garbled(random, fixed.tag) : fixed.tag,
    at: pass.at + Math.round(seconds * 1000),
    rssi: Math.round((-50 + normal(random) * 4) * 2) / 2,
  }));
}

/** One to six reads about the moment a tag goes by, fewer the faster it goes. */
function momentsAround(random: Random, at: number, speed: number): number[] {
  const heardFor = (2 * BEAM_M) / Math.max(speed, 0.4);
  const expected = heardFor * READS_A_SECOND * between(random, 0.6, 1.4);
  const count = Math.min(6, Math.max(1, Math.round(expected)));
  const step = Math.min(heardFor / count, 0.5);
  return Array.from(
    { length: count },
    (_, index) => at + (index - (count - 1) / 2) * step + (normal(random) * JITTER_MS) / 1000,
  );
}

/** While a train stands with the tag in the beam, it is read now and then. */
function momentsStanding(random: Random, motion: Motion, target: number): number[] {
  return motion.flatMap((stretch) => {
    const isStill = stretch.speed === 0 && stretch.acceleration === 0;
    if (!isStill || Math.abs(metresAt(stretch, 0) - target) > BEAM_M) return [];
    const count = Math.min(STANDING_MOST, Math.floor(stretch.seconds / STANDING_EVERY_S));
    return Array.from({ length: count }, (_, index) => {
      return stretch.start + (index + 0.5 + random() * 0.3) * STANDING_EVERY_S;
    });
  });
}

/** One of the first 60 bits the other way: its check sum fails. EPC tags have their own check. */
function garbled(random: Random, tag: string): string {
  if (tag.length !== 32) return tag;
  const bit = wholeBetween(random, 0, 59);
  const digit = Math.floor(bit / 4);
  const flipped = parseInt(tag.charAt(digit), 16) ^ (8 >> (bit % 4));
  return tag.slice(0, digit) + flipped.toString(16).toUpperCase() + tag.slice(digit + 1);
}
