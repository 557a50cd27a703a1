import { inFile } from './in-file.mjs';

/** Rules by which passages become passes. */
export const passMutations = [
  ...inFile('server/domain/movements/passes.ts', 'rules', [
    [
      'a gap ends a pass',
      'if (gap <= rules.point.passGapSeconds * 1000) return false;',
      'if (gap <= LONGEST_STOP_MS) return false;',
    ],
    [
      'a train that stopped over the reader is one pass',
      'return !mayHaveStopped || endOfTrainCame || locomotiveComes;',
      'return true;',
    ],
    [
      'that stop is no longer than half an hour',
      'gap <= LONGEST_STOP_MS && isSlow(last)',
      'isSlow(last)',
    ],
    ['a train that stops is slow before', 'isSlow(last) && isSlow(next)', 'isSlow(next)'],
    ['and slow after', 'isSlow(last) && isSlow(next)', 'isSlow(last)'],
    ['slow is under 8 km/h', 'own.speedKmh < SLOW_KMH', 'own.speedKmh <= SLOW_KMH'],
    [
      'a stop does not join opposite directions',
      'isSlow(next) && !opposes(pass.passages, next)',
      'isSlow(next)',
    ],
    [
      'a stop ends at an end-of-train device',
      'return !mayHaveStopped || endOfTrainCame || locomotiveComes;',
      'return !mayHaveStopped || locomotiveComes;',
    ],
    [
      'a stop ends before a locomotive',
      'return !mayHaveStopped || endOfTrainCame || locomotiveComes;',
      'return !mayHaveStopped || endOfTrainCame;',
    ],
    [
      'twenty seconds after an end-of-train device another train comes',
      'if (endOfTrainCame && gap > AFTER_END_OF_TRAIN_MS) return true;',
    ],
    [
      'a locomotive after a minute heads another train',
      'if (locomotiveComes && gap > BEFORE_LOCOMOTIVE_MS) return true;',
    ],
  ]),
  ...inFile('server/domain/movements/passes.ts', 'rules', [
    ['opposite directions are two passes', 'if (!opposes(earlier, newest)) return;', 'return;'],
    [
      'a reversal is linked to the pass before',
      'cutAtWidestGap(drafts, lastKnown(earlier), { reversal: true, later });',
      'cutAtWidestGap(drafts, lastKnown(earlier), { reversal: false, later });',
    ],
    [
      'after half an hour it is no reversal',
      'const near = draft && passage.first.at - draft.reach <= LONGEST_STOP_MS;',
      'const near = draft;',
    ],
    ['each unit once in a pass', 'if (before === passages.length - 1) return;', 'return;'],
    [
      'the cut is at the widest gap',
      'if (index > from && passage.first.at - reach > widest) {',
      'if (index === from + 1) {',
    ],
    [
      'of two gaps of one width the earlier is cut',
      'passage.first.at - reach > widest',
      'passage.first.at - reach >= widest',
    ],
    [
      'a standing car reaches no further than a minute',
      'return standing ? Math.min(passage.lastAt, passage.first.at + STANDING_MS) : passage.lastAt;',
      'return passage.lastAt;',
    ],
    [
      'a passage without direction goes with its pass',
      'if (!pass.direction || outsideRecords || besideCut) {',
      'if (pass) {',
    ],
    [
      'but not outside of the wheel records',
      'if (!pass.direction || outsideRecords || besideCut) {',
      'if (!pass.direction || besideCut) {',
    ],
    [
      'nor next to the cut of a reversal',
      'if (!pass.direction || outsideRecords || besideCut) {',
      'if (!pass.direction || outsideRecords) {',
    ],
    [
      'before the cut',
      'if (atEnd) passages.slice(lastKnown(passages) + 1).forEach((passage) => beside.add(passage));',
    ],
    [
      'and after it',
      'if (atStart) passages.slice(0, known).forEach((passage) => beside.add(passage));',
    ],
    ['at several offsets only', 'hasSeveralOffsets(rules.network, rules.point)', 'rules'],
    [
      'a car that went back has not crossed',
      "if (own.returned) return { passage, role: 'returned', direction: null, basis: null };",
    ],
    [
      'a pass is as fast as its middle passage',
      'median(passages.flatMap(({ own }) => own.speedKmh ?? []))',
      'passages[0]?.own.speedKmh ?? null',
    ],
    [
      'a start is clean only where it was settled at once',
      'drafts.push(draftOf(tail, reversal, later && tail.length === 1));',
      'drafts.push(draftOf(tail, reversal, later));',
    ],
    ['passes of one instant are numbered', 'return { ...pass, ordinal };', 'return pass;'],
  ]),
  ...inFile('server/domain/movements/passes.ts', 'running', [
    ['a refold knows of a reversal before its start', ': from.reversal;', ': false;'],
  ]),
];
