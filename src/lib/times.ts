const weekMilliseconds = 7 * 86_400_000;
const hourMilliseconds = 3_600_000;
const formats = new Map<string, Intl.DateTimeFormat>();

function format(zone: string): Intl.DateTimeFormat {
  let known = formats.get(zone);
  if (!known) {
    known = new Intl.DateTimeFormat('en-US', {
      timeZone: zone,
      hourCycle: 'h23',
      weekday: 'short',
      day: 'numeric',
      month: 'short',
      year: 'numeric',
      hour: '2-digit',
      minute: '2-digit',
      second: '2-digit',
      timeZoneName: 'short',
    });
    formats.set(zone, known);
  }
  return known;
}

type Parts = Record<
  'weekday' | 'day' | 'month' | 'year' | 'hour' | 'minute' | 'second' | 'timeZoneName',
  string
>;

const partsOf = (at: number, zone: string): Parts =>
  Object.fromEntries(
    format(zone)
      .formatToParts(at)
      .map(({ type, value }) => [type, value]),
  ) as Parts;

/** The zone's name in use at that instant: "CST", "CDT", "GMT+1". */
export const zoneName = (zone: string, at: number): string => partsOf(at, zone).timeZoneName;

/** True in the hour that clocks show twice when summer time ends. */
function isRepeated(at: number, zone: string, parts: Parts): boolean {
  return [at - hourMilliseconds, at + hourMilliseconds].some((other) => {
    const there = partsOf(other, zone);
    return there.hour === parts.hour && there.timeZoneName !== parts.timeZoneName;
  });
}

/**
 * "Fri 05:31" within seven days, else "20 Nov 05:31", with the year when it is another one.
 * The zone stands in the column's heading and is repeated here only in the hour that comes twice.
 */
export function formatInstant(instant: string, zone: string, now: number): string {
  const at = Date.parse(instant);
  const parts = partsOf(at, zone);
  const clock = `${parts.hour}:${parts.minute}`;
  const today = partsOf(now, zone);
  // Last Tuesday is not called Tuesday on a Tuesday.
  const isOtherToday = today.weekday === parts.weekday && today.day !== parts.day;
  const near = Math.abs(now - at) < weekMilliseconds - hourMilliseconds && !isOtherToday;
  const otherYear = today.year === parts.year ? '' : ` ${parts.year}`;
  const day = near ? parts.weekday : `${parts.day} ${parts.month}${otherYear}`;
  const twice = isRepeated(at, zone, parts) ? ` ${parts.timeZoneName}` : '';
  return `${day} ${clock}${twice}`;
}

/** "Tue 1 Dec 2026 04:51:08 CST", for places where one instant stands alone. */
export function formatInstantInFull(instant: string, zone: string): string {
  const parts = partsOf(Date.parse(instant), zone);
  return `${parts.weekday} ${parts.day} ${parts.month} ${parts.year} ${parts.hour}:${parts.minute}:${parts.second} ${parts.timeZoneName}`;
}

/** "1 Dec 2026 04:51:08.250"; the zone stands in the heading, but for the hour that comes twice. */
export function formatToTheMillisecond(instant: string, zone: string): string {
  const at = Date.parse(instant);
  const parts = partsOf(at, zone);
  const fraction = String(new Date(at).getUTCMilliseconds()).padStart(3, '0');
  const twice = isRepeated(at, zone, parts) ? ` ${parts.timeZoneName}` : '';
  return `${parts.day} ${parts.month} ${parts.year} ${parts.hour}:${parts.minute}:${parts.second}.${fraction}${twice}`;
}

/** "07:41:08 CST". */
export function formatClock(at: number, zone: string): string {
  const parts = partsOf(at, zone);
  return `${parts.hour}:${parts.minute}:${parts.second} ${parts.timeZoneName}`;
}

/** "14:00", without a day. */
export function formatTimeOfDay(instant: string, zone: string): string {
  const parts = partsOf(Date.parse(instant), zone);
  return `${parts.hour}:${parts.minute}`;
}

/** True when both instants fall on one calendar day of the zone. */
export function isSameDay(one: string, other: string, zone: string): boolean {
  const a = partsOf(Date.parse(one), zone);
  const b = partsOf(Date.parse(other), zone);
  return a.day === b.day && a.month === b.month && a.year === b.year;
}
