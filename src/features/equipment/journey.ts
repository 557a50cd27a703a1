import type { LegView, StayView } from '../../lib/wire';

/** A line of the journey: a stay, or the leg that led to the stay after it. */
export type JourneyLine =
  { kind: 'stay'; id: string; stay: StayView } | { kind: 'leg'; id: string; leg: LegView };

/** Stays and legs in one row of time, newest first. */
export function journeyLines(stays: StayView[], legs: LegView[]): JourneyLine[] {
  const lines: (JourneyLine & { at: string })[] = [
    ...stays.map((stay): JourneyLine & { at: string } => ({
      kind: 'stay',
      id: `stay-${stay.site.code}-${stay.firstSeenAt}`,
      stay,
      at: stay.arrivedAt ?? stay.firstSeenAt,
    })),
    ...legs.map((leg): JourneyLine & { at: string } => ({
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
