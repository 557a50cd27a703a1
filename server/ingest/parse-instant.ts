const RFC3339 =
  /^(\d{4})-(\d\d)-(\d\d)[Tt](\d\d):(\d\d):(\d\d)(?:\.(\d+))?(?:([Zz])|([+-])(\d\d):(\d\d))$/;

const EARLIEST = Date.UTC(1990, 0, 1);
const END = Date.UTC(2101, 0, 1);

/**
 * Milliseconds of an RFC 3339 instant, floored; null without an offset, for a date that does not
 * exist, and outside the years 1990 to 2100. A leap second counts as the second after it.
 */
export function parseInstant(text: string): number | null {
  const match = RFC3339.exec(text);
  if (!match) return null;
  const part = (index: number) => Number(match[index] ?? 0);
  const [year, month, day, hour, minute, second] = [1, 2, 3, 4, 5, 6].map(part) as Six;
  const date = new Date(Date.UTC(year, month - 1, day));
  if (date.getUTCMonth() !== month - 1 || date.getUTCDate() !== day) return null;
  if (hour > 23 || minute > 59 || second > 60 || part(10) > 23 || part(11) > 59) return null;
  const fraction = Number((match[7] ?? '').padEnd(3, '0').slice(0, 3));
  const offsetMinutes = (part(10) * 60 + part(11)) * (match[9] === '-' ? -1 : 1);
  const ms = Date.UTC(year, month - 1, day, hour, minute - offsetMinutes, second, fraction);
  return ms >= EARLIEST && ms < END ? ms : null;
}

type Six = [number, number, number, number, number, number];
