import type { LegView, StayView } from '../../lib/wire';

/** A line of the journey: a stay, or the leg that led to the stay after it. */
export type JourneyLine =
  { kind: 'stay'; id: string; stay: StayView } | { kind: 'leg'; id: string; leg: LegView };

const ridingKinds = new Set(['container', 'trailer', 'chassis', 'generatorSet']);

/** True of what goes by rail on a car: its miles are those of the cars under it. */
export const rides = (kind: string): boolean => ridingKinds.has(kind);

/** Out and back unseen, at the same site: nobody knows of a way between. */
const goesNowhere = ({ from, to, railMetres, minutes }: LegView): boolean =>
  from.code === to.code && railMetres === 0 && minutes === 0;

/** Stays and legs in one row of time, newest first. */
export function journeyLines(stays: StayView[], legs: LegView[]): JourneyLine[] {
  const lines: (JourneyLine & { at: string })[] = [
    ...stays.map((stay): JourneyLine & { at: string } => ({
      kind: 'stay',
      id: `stay-${stay.site.code}-${stay.firstSeenAt}`,
      stay,
      at: stay.arrivedAt ?? stay.firstSeenAt,
    })),
    ...legs
      .filter((leg) => !goesNowhere(leg))
      .map((leg): JourneyLine & { at: string } => ({
        kind: 'leg',
        id: `leg-${leg.from.code}-${leg.departedAt}`,
        leg,
        at: leg.departedAt,
      })),
  ];
  return lines.sort((a, b) => Date.parse(b.at) - Date.parse(a.at));
}

/** Rail metres by UTC month of arrival, newest month first: "2026-11" and its sum. */
export function metresByMonth(legs: LegView[]): { month: string; metres: number; legs: number }[] {
  const months = new Map<string, { metres: number; legs: number }>();
  for (const { arrivedAt, railMetres } of legs) {
    if (!arrivedAt) continue;
    const month = arrivedAt.slice(0, 7);
    const sum = months.get(month) ?? { metres: 0, legs: 0 };
    months.set(month, { metres: sum.metres + railMetres, legs: sum.legs + 1 });
  }
  return [...months]
    .map(([month, sum]) => ({ month, ...sum }))
    .sort((a, b) => b.month.localeCompare(a.month));
}
