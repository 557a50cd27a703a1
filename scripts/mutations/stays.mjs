import { inFile } from './in-file.mjs';

const RULES = 'server/domain/movements/fold-rules.ts';
const UNIT = 'server/domain/movements/fold-unit.ts';

/** Rules by which sightings become stays, legs and last seen. */
export const stayMutations = [
  ...inFile(RULES, 'rules', [
    ['excursions are counted', 'stay.excursions += 1;'],
    [
      'outward twice at one lead: it came back right after it left',
      'if (isRead(state.stay?.departureBasis)) comeBack(step, null);\n    else reopen(state.stay as Stay);',
    ],
    [
      'a reported departure gives way to the read of it',
      'if (isRead(state.stay?.departureBasis)) comeBack(step, null);',
      'if (state) comeBack(step, null);',
    ],
    [
      'seen without direction an open stay goes on',
      'if (stay.departedAt === null) return stayOn(step, place.track);\n    if (lingering',
      'if (lingering',
    ],
    [
      'reported to arrive where it is, the stay goes on',
      'if (stay.departedAt === null) return stayOn(step, place.track);\n    if (isBackFromOutside',
      'if (isBackFromOutside',
    ],
    [
      'reported back soon after it left, it had not left for good',
      'if (isBackFromOutside(step, returnMs)) return comeBack(step, place.track);\n  }\n  openStay(step, place, { arrivedAt: step.at',
      '}\n  openStay(step, place, { arrivedAt: step.at',
    ],
    [
      'a crossing in soon after a reported arrival is that arrival',
      'if (step.state.stay) step.state.stay.openedByPresence = true;',
    ],
    [
      'inward with a stay open: the stay goes on',
      'if (stay.departedAt === null && at - previous.at < returnMs) {',
      'if (!step) {',
    ],
    [
      'after the return time an exit was missed',
      'stay.departedAt === null && at - previous.at < returnMs',
      'stay.departedAt === null',
    ],
    [
      'a crossing in soon after sets the arrival',
      'if (stay.openedByPresence && at - stay.firstSeenAt <= returnMs) setArrival(state, stay, at);',
    ],
    [
      'soon is within the return time',
      'stay.openedByPresence && at - stay.firstSeenAt <= returnMs',
      'stay.openedByPresence',
    ],
    [
      'only a stay that a presence opened has its arrival set',
      'stay.openedByPresence && at - stay.firstSeenAt <= returnMs',
      'at - stay.firstSeenAt <= returnMs',
    ],
    [
      'the arrival so set is the leg’s, too',
      'if (state.leg) state.leg = { ...state.leg, arrivedAt: at };',
    ],
    [
      'out to the line and soon back is an excursion',
      'return previous.siteId === stay.siteId && at - stay.departedAt <= returnMs;',
      'return false;',
    ],
    [
      'back later than the return time it had left',
      'previous.siteId === stay.siteId && at - stay.departedAt <= returnMs',
      'previous.siteId === stay.siteId',
    ],
    [
      'seen elsewhere in between it had left',
      'if (!stay || stay.departedAt === null || !previous?.outward) return false;',
      'if (!stay || stay.departedAt === null || !previous) return false;',
    ],
    [
      'outward twice: the second is a departure of its own',
      'if (!there || state.stay?.departedAt !== null) {',
      'if (!there) {',
    ],
    [
      'a departure is provisional for the return time',
      'departureFinalAt: at + returnMs,',
      'departureFinalAt: null,',
    ],
    ['at a line point it has left wherever it stood', 'closeInferred(step, siteId, step.at);'],
    ['and the departure is final', 'if (step.state.stay) step.state.stay.departureFinalAt = null;'],
    [
      'the way goes over the line points where it was seen',
      'step.state.trail = [...step.state.trail, siteId];',
    ],
    [
      'between two sites it was at neither of, it is on its way',
      'if (!place) return passOnLine(step);',
      'if (!place) return;',
    ],
    [
      'shortly after it went out it lingers',
      'if (lingering && previous?.outward && at - stay.departedAt <= LINGER_MS) {',
      'if (!step) {',
    ],
    [
      'it lingers for half an hour',
      'previous?.outward && at - stay.departedAt <= LINGER_MS',
      'previous?.outward',
    ],
    ['at a spot nothing lingers', 'if (lingering && previous?.outward', 'if (previous?.outward'],
    [
      'later it reopens that stay',
      'if (isBackFromOutside(step, returnMs)) return comeBack(step, place.track);\n  }\n  openStay(step, place, presentSince(step, spot));',
      '}\n  openStay(step, place, presentSince(step, spot));',
    ],
    [
      'a stay keeps its track where a sighting tells none',
      'stay.track = track ?? stay.track;',
      'stay.track = track;',
    ],
  ]),
  ...inFile(UNIT, 'rules', [
    ['a doubted sighting does not move it', 'if (doubt && !corroboratedBy) {', 'if (!context) {'],
    [
      'a doubt that something speaks against is kept all the same',
      'if (doubt) step.done.doubts.push({ ...doubt, corroboratedBy });',
    ],
    [
      'the next sighting may bear a doubted one out',
      'const step = counts ? foldSighting(context, state, sighting) : { state, done };',
      'const step = { state, done };',
    ],
    ['the other tag speaks for a sighting', "if (tagCount > 1) return 'side';"],
    [
      'units that were with it both times speak for it',
      "companions.shared(previous.pass, pass) > 0 ? 'mates' : null",
      'null',
    ],
    [
      'a report that no train could bear out moves nothing',
      'if (before.previous && metresTooFar(network, before.previous, siteId, firstAt) !== null) {',
      'if (!context) {',
    ],
    [
      'a car that stopped astride the reader has not crossed twice',
      'if (isSameCrossing(before, sighting)) return goOn(before, sighting);',
    ],
    [
      'astride is half an hour at most',
      'sighting.firstAt - previous.at <= LONGEST_STOP_MS',
      'true',
    ],
    [
      'crossing back soon strikes both',
      'const drill = struckDrill(network, before, sighting);',
      'const drill = null;',
    ],
    [
      'soon is within the drill time',
      'sighting.direction !== drill.direction && sighting.firstAt <= limit ? drill : null',
      'sighting.direction !== drill.direction ? drill : null',
    ],
    [
      'only a crossing back strikes',
      'return sighting.direction !== drill.direction && sighting.firstAt <= limit',
      'return sighting.firstAt <= limit',
    ],
    [
      'a drill is over the same read point',
      'if (sighting.readPointId !== drill.readPointId) return null;',
    ],
    [
      'both are provisional for the drill time',
      'if (state.stay) state.stay.arrivalFinalAt = finalAt;',
    ],
    ['the departure, too', 'if (left) left.departureFinalAt = finalAt;'],
    [
      'within one site only the track changes',
      'if (from && to && from.siteId === to.siteId) return moveWithin(step, to);',
    ],
    [
      'inward over a gate with the stay beyond it open: the stay goes on',
      'if (to && isStillAt(step, to.siteId)) return arrive(step, to);',
    ],
    [
      'for the return time',
      'return at - previous.at < network.site(siteId).returnHours * HOUR_MS;',
      'return true;',
    ],
    [
      'between two sites it is where it already was',
      'const place = [from, to].find(({ siteId }) => siteId === open);',
      'const place = null;',
    ],
  ]),
  ...inFile('server/domain/movements/last-seen.ts', 'rules', [
    [
      'nobody waits for a stranger',
      'quietAt: registered && limited && !open',
      'quietAt: limited && !open',
    ],
    ['a locomotive has no limits', "'locomotive', "],
    ['an end-of-train device has none', "['locomotive', 'endOfTrain']", "['locomotive']"],
    ['on hand nothing is quiet', 'registered && limited && !open ?', 'registered && limited ?'],
    [
      'how long is too long counts from the arrival',
      '(open.arrivedAt ?? open.firstSeenAt)',
      '(open.firstSeenAt)',
    ],
  ]),
  ...inFile('server/domain/movements/fold-state.ts', 'running', [
    ['a fold may change the stay that is last', '...(state.stay ? [state.stay] : []),'],
  ]),
];
