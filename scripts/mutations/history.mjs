import { inFile } from './in-file.mjs';

const at = (file) => `server/domain/movements/${file}.ts`;

/** Rules about what nobody saw, what is doubted, what tells a direction, and who is who. */
export const historyMutations = [
  ...inFile(at('infer-stays'), 'rules', [
    [
      'at the first sighting ever nobody knows since when',
      'if (!state.previous) return unknownArrival(at);',
      "if (!state.previous) return { arrivedAt: at, arrivalBasis: 'read', arrivalBounds: null };",
    ],
    [
      'at a spot the first read is the arrival',
      "if (spot) return { arrivedAt: at, arrivalBasis: 'read', arrivalBounds: null };",
    ],
    [
      'that arrival is a travel time after the sighting before',
      'arrivedAt: clamp(previous.at + travel, previous.at, at),',
      'arrivedAt: previous.at,',
    ],
    [
      'and no later than the departure',
      'arrivedAt: clamp(previous.at + travel, previous.at, at),',
      'arrivedAt: previous.at + travel,',
    ],
    [
      'a departure nobody saw is a travel time before the next sighting',
      'clamp(shared ?? nextAt - travel, previous.at, nextAt)',
      'clamp(shared ?? nextAt, previous.at, nextAt)',
    ],
    [
      'and not before it was last seen there',
      'clamp(shared ?? nextAt - travel, previous.at, nextAt)',
      'shared ?? nextAt - travel',
    ],
    [
      'it left with those that it comes with',
      'clamp(shared ?? nextAt - travel, previous.at, nextAt)',
      'clamp(nextAt - travel, previous.at, nextAt)',
    ],
    [
      'seen at the same site next: the middle of the bounds',
      '? Math.floor((previous.at + nextAt) / 2)',
      '? nextAt',
    ],
    ['and left out of dwell', 'outOfDwell: sameSite,', 'outOfDwell: false,'],
    [
      'boxes count no miles of their own',
      'railMetres: countsMiles ? railMetres : 0,',
      'railMetres,',
    ],
    [
      'a leg over a way nobody knows is estimated',
      'estimated ||= route?.estimated ?? true;',
      'estimated ||= route?.estimated ?? false;',
    ],
  ]),
  ...inFile(at('sighting'), 'rules', [
    [
      'a long passage out leaves with its last read',
      'return leaves && lastAt - firstAt > LONG_PASSAGE_MS ? lastAt : firstAt;',
      'return firstAt;',
    ],
    ['long is over two minutes', 'leaves && lastAt - firstAt > LONG_PASSAGE_MS', 'leaves'],
    ['a long passage in arrives with its first read', 'return leaves && lastAt', 'return lastAt'],
    [
      'at a line point nothing stands',
      "network.site(place.siteId).kind !== 'line' ? place : null",
      'place',
    ],
    [
      'a car that only rolls past a spot was not spotted',
      "role === 'crossing' ? 'presence' : 'spot'",
      "'spot'",
    ],
  ]),
  ...inFile(at('companions'), 'rules', [
    [
      'half of the mates must have been read leaving',
      'departures.length === 0 || departures.length * 2 < others',
      'departures.length === 0',
    ],
    [
      'of their departures the lower median counts',
      'sorted[(sorted.length - 1) >> 1]',
      'sorted[0]',
    ],
  ]),
  ...inFile(at('doubt'), 'rules', [
    [
      'no train is faster than 130 km/h',
      'return railMetres / 1000 <= hours * FASTEST_KMH ? null : railMetres;',
      'return null;',
    ],
    ['within 20 km nothing is doubted', 'if (railMetres <= LEAST_METRES) return null;'],
    [
      'the same read point again bears nothing out',
      'if (sighting.readPointId === doubted.readPointId) return false;',
    ],
    ['what fits both bears nothing out', '&& doubtOf(network, previous, sighting) !== null'],
    ['what fits neither bears nothing out', 'doubtOf(network, after, sighting) === null &&'],
  ]),
  ...inFile(at('fold-reports'), 'rules', [
    [
      'a report of a departure that was seen changes nothing',
      'return hasLeft(step, siteId) ? undefined : leave(step, siteId, basis);',
      'return leave(step, siteId, basis);',
    ],
    ['a ghost’s stay is closed', 'return closeGhost(step, report);', 'return;'],
    ['and left out of dwell', 'outOfDwell: true,', 'outOfDwell: false,'],
    [
      'a ghost’s stay is one that is open there',
      'state.stay?.siteId !== siteId || state.stay.departedAt !== null',
      '!state.stay',
    ],
  ]),
  ...inFile(at('strays'), 'rules', [
    [
      'of two parallel tracks the one with more reads has the car',
      'return more > 0 || (more === 0 && earlier);',
      'return false;',
    ],
    [
      'of equals the one that heard it first',
      'return more > 0 || (more === 0 && earlier);',
      'return more > 0;',
    ],
    [
      'parallel is within 30 s',
      'if (gapBetween(visit.evidence, rival.evidence) > PARALLEL_MS) return false;',
    ],
    ['a car beside the track moves nothing', 'if (again) beside.add(visit);'],
    ['it is at a single antenna no matter what', 'network.antennaCountOf(point.id) < 2', 'false'],
    [
      'it is heard again within the hour',
      'gapBetween(visit.evidence, other.evidence) <= BESIDE_MS &&',
    ],
    ['by the same tag at the same antenna', 'hasGroup(other.evidence, heard) &&'],
    [
      'and again without direction',
      'hasGroup(other.evidence, heard) &&\n        describePassage(rules, other.unit, [other.evidence]).own.direction === null,',
      'hasGroup(other.evidence, heard),',
    ],
    ['what knows its direction is no stray', 'if (passage.own.direction !== null) continue;'],
    [
      'what wheel sensors saw is no stray',
      'passage.own.sensed || !isAlone(visit, all)',
      '!isAlone(visit, all)',
    ],
    [
      'where other units go by it is no stray',
      'passage.own.sensed || !isAlone(visit, all)',
      'passage.own.sensed',
    ],
    [
      'one tag at one antenna only',
      'return heard.every((one) => isSame(one, first)) ? first : null;',
      'return first;',
    ],
  ]),
  ...inFile(at('direction-by-history'), 'rules', [
    [
      'three votes, or all',
      'if (votes.length < LEAST_VOTES && votes.length < voters.length) return null;',
    ],
    ['a car that stands does not vote', '|| lastAt - firstAt > STANDING_MS'],
    ['a car that went back does not vote', "role === 'returned' || lastAt", 'lastAt'],
    [
      'at two offsets what one antenna heard does not vote',
      'return !severalOffsets || others.length > 0 || !only || onlyGroup(only) === null;',
      'return true;',
    ],
    ['sixty in a hundred', 'if (increasing / votes.length >= MAJORITY)', 'if (increasing)'],
    [
      'whose two sightings disagree does not vote',
      'if (came && went) return opposite(came) === went ? went : null;',
    ],
    ['it came from the side where it was', 'if (came) return opposite(came);'],
    ['it went to the side where it is next', 'return went ?? null;', 'return null;'],
    [
      'of the same read point a later pass counts only by its own reads',
      'if (!after.direction || !isOwn) return null;',
      'if (!after.direction) return null;',
    ],
    [
      'with a lead not equipped only within the return time',
      'return leads.some(({ equipped }) => !equipped) && ms > returnHours * HOUR_MS;',
      'return false;',
    ],
    ['without one at any time', 'leads.some(({ equipped }) => !equipped) && ms', 'ms'],
  ]),
  ...inFile(at('direct-passes'), 'rules', [
    ['only passes without direction of their own are voted on', 'if (!isUndirected(pass)) return;'],
  ]),
  ...inFile(at('passes'), 'rules', [
    [
      'who went back has not crossed by history either',
      "if (member.role === 'returned') return member;",
    ],
  ]),
  ...inFile(at('resolve-read'), 'rules', [
    ['a registered tag counts before the mark on it', 'network.unitOfTag(tag.value, read.at) ??'],
    [
      'what the door alone could judge stays set aside',
      'if (isDoorFact(read.holdCode)) return null;',
    ],
  ]),
  ...inFile(at('configuration'), 'rules', [
    [
      'a name counts from its first instant',
      'if (naming.validFrom !== null && at < naming.validFrom) continue;',
    ],
    [
      'a name counts before its last instant',
      'if (naming.validTo !== null && at >= naming.validTo) continue;',
    ],
    [
      'of two names the later counts',
      '(naming.validFrom ?? -Infinity) > (holder.validFrom ?? -Infinity)',
      'false',
    ],
  ]),
  ...inFile(at('unit-facts'), 'rules', [
    [
      'sightings of one instant are in order of site codes',
      'compareText(a.siteCode, b.siteCode) ||',
    ],
  ]),
];
