import { inFile } from './in-file.mjs';

/** Rules by which reads become passages. */
export const passageMutations = [
  ...inFile('server/domain/movements/visits.ts', 'rules', [
    [
      'reads belong together only up to the visit gap',
      'if (chain && last && read.at - last.at <= gapMs) chain.push(read);',
      'if (chain && last) chain.push(read);',
    ],
  ]),
  ...inFile('server/domain/movements/visits.ts', 'running', [
    [
      'visits that touch become one',
      'firstRead(visit.evidence).at - lastReadAt(before.evidence) <= gapMs',
      'firstRead(visit.evidence).at < lastReadAt(before.evidence)',
    ],
  ]),
  ...inFile('server/domain/movements/evidence.ts', 'rules', [
    [
      'a read that comes twice counts once',
      'return !before || compareReads(before, read) !== 0;',
      'return true;',
    ],
  ]),
  ...inFile('server/domain/movements/evidence.ts', 'running', [
    [
      'reads of one instant are in order of antenna',
      'return a.at - b.at || a.antenna - b.antenna || compareText(a.tag, b.tag);',
      'return a.at - b.at;',
    ],
  ]),
  ...inFile('server/domain/movements/passages.ts', 'rules', [
    [
      'a car that stopped between two offsets made one passage',
      'if (severalOffsets && before && stoppedBetween(before, passage)) {',
      'if (!rules) {',
    ],
    [
      'that stop is no longer than half an hour',
      'after.first.at - before.lastAt <= LONGEST_STOP_MS &&',
    ],
    [
      'two passages that know their directions stay apart',
      '(before.own.direction === null || after.own.direction === null)',
      'true',
    ],
    [
      'the register says of which kind a unit is, before its tag does',
      'if (known?.registered) return { kind: known.kind, kindRank: REGISTER_RANK };',
    ],
  ]),
  ...inFile('server/domain/movements/passages.ts', 'rules', [
    [
      'of a stranger’s tags the lowest group code says its kind',
      'if (rank < kindRank)',
      'if (kindRank === Infinity)',
    ],
  ]),
  ...inFile('server/domain/movements/own-direction.ts', 'rules', [
    [
      'a wheel record gives the direction',
      'const bySensors = first?.direction ?? last?.direction ?? null;',
      'const bySensors = null;',
    ],
    [
      'a wheel record reaches ten seconds further',
      'export const WHEEL_REACH_MS = 10_000;',
      'export const WHEEL_REACH_MS = 0;',
    ],
    [
      'of two wheel records the nearer one counts',
      'if (distance < least) [best, least] = [record, distance];',
      'if (distance <= WHEEL_REACH_MS) best ??= record;',
    ],
    [
      'the record over the last read counts where none covers the first',
      'first?.direction ?? last?.direction ?? null',
      'first?.direction ?? null',
    ],
    [
      'the speed is the wheel sensors’ where they tell one',
      'rounded(measured ?? (slope',
      'rounded((slope',
    ],
    [
      'no train is faster than 300 km/h',
      'Math.min(Math.round(speedKmh * 100) / 100, FASTEST_KMH)',
      'Math.round(speedKmh * 100) / 100',
    ],
    [
      'antennas of two sides are not mixed',
      'const key = `${antenna.side} ${group.tag}`;',
      'const key = group.tag;',
    ],
    [
      'tags of a car are not mixed',
      'const key = `${antenna.side} ${group.tag}`;',
      'const key = antenna.side;',
    ],
    [
      'an antenna’s point is the middle of its reads',
      'y: (group.firstAt + group.lastAt) / 2 }',
      'y: group.firstAt }',
    ],
    [
      'first and last read under opposite wheel records: it returned',
      'return first?.direction && returned',
      'return false',
    ],
    [
      'back at the first antenna after another: it returned',
      'severalOffsets ? wentBackAlong(visits, antennaOf) : byTags && wentBackByTags(visits)',
      'severalOffsets ? false : byTags && wentBackByTags(visits)',
    ],
    [
      'back at the first tag after the other: it returned',
      'byTags && wentBackByTags(visits)',
      'false',
    ],
    [
      'an end-of-train device does not return by its tags',
      'const byTags = !sensed && !isEndOfTrain;',
      'const byTags = !sensed;',
    ],
    [
      'where a wheel record is, tags tell no return',
      'const byTags = !sensed && !isEndOfTrain;',
      'const byTags = !isEndOfTrain;',
    ],
    ['ten seconds away, or it did not return', 'return away >= AWAY_MS;', 'return away > 0;'],
  ]),
  ...inFile('server/domain/statistics/theil-sen.ts', 'rules', [
    [
      'a slope is the median of all pairs',
      'return median(groups.flatMap(pairSlopes));',
      'return groups.flatMap(pairSlopes)[0] ?? null;',
    ],
  ]),
];
