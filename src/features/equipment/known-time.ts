import { formatInstant, formatTimeOfDay, isSameDay } from '../../lib/times';
import type { StayView } from '../../lib/wire';

type Bounds = StayView['arrivalBounds'];

/** An instant with what is known of it. */
export interface KnownTime {
  at: string | null;
  basis: StayView['arrivalBasis'] | null;
  bounds: Bounds;
  provisional: boolean;
}

/** A time in words: how it reads, and how it is known. `said` '' where the end has not come. */
export function sayKnownTime(time: KnownTime, zone: string, now: number) {
  const { at, basis, bounds, provisional } = time;
  const written = at ? formatInstant(at, zone, now) : '';
  const ways: Record<NonNullable<KnownTime['basis']>, { said: string; how: string }> = {
    read: { said: written, how: 'read' },
    report: sayReported('reported', written, bounds, zone, now),
    hand: sayReported('seen by eye', written, bounds, zone, now),
    inferred: {
      said: written && `about ${written}`,
      how: `inferred${sayBounds(bounds, zone, now)}`,
    },
    unknown: { said: sayUnknown(bounds, zone, now), how: 'not seen' },
  };
  const way = basis ? ways[basis] : { said: written, how: '' };
  return provisional ? { said: way.said, how: 'may only be switching' } : way;
}

/** What somebody said. With bounds it is the latest it can be: looked for there, and gone. */
function sayReported(how: string, written: string, bounds: Bounds, zone: string, now: number) {
  if (!bounds) return { said: written, how };
  return { said: written && `by ${written}`, how: `${how}${sayBounds(bounds, zone, now)}` };
}

/** " between 11:20 and 15:05", with the day where they fall on two. */
function sayBounds(bounds: Bounds, zone: string, now: number): string {
  const { earliest, latest } = bounds ?? {};
  if (!earliest || !latest) return '';
  const end = isSameDay(earliest, latest, zone)
    ? formatTimeOfDay(latest, zone)
    : formatInstant(latest, zone, now);
  return `, between ${formatInstant(earliest, zone, now)} and ${end}`;
}

const sayUnknown = (bounds: Bounds, zone: string, now: number): string =>
  bounds?.latest ? `before ${formatInstant(bounds.latest, zone, now)}` : 'before the first read';
