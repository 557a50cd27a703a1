const RFC3339 = /^\d{4}-\d\d-\d\d[Tt]\d\d:\d\d:\d\d(\.\d+)?([Zz]|[+-]\d\d:\d\d)$/;

const EARLIEST = Date.UTC(1990, 0, 1);
const END = Date.UTC(2101, 0, 1);

/**
 * Milliseconds of an RFC 3339 instant, floored; null without an offset, for a date that does not
 * exist, and outside the years 1990 to 2100. A leap second counts as the second after it.
 */
export function parseInstant(text: string): number | null {
  if (!RFC3339.test(text)) return null;
  const year = digits(text, 0, 4);
  const month = digits(text, 5, 7);
  const day = digits(text, 8, 10);
  const hour = digits(text, 11, 13);
  const minute = digits(text, 14, 16);
  const second = digits(text, 17, 19);
  if (month < 1 || month > 12 || day < 1 || day > daysOf(year, month)) return null;
  if (hour > 23 || minute > 59 || second > 60) return null;
  const offsetMinutes = offsetOf(text);
  if (offsetMinutes === null) return null;
  const ms = Date.UTC(year, month - 1, day, hour, minute - offsetMinutes, second, fractionOf(text));
  return ms >= EARLIEST && ms < END ? ms : null;
}

const ZERO = 48;

/** The number that the digits from `from` to before `to` make; without cutting the text apart. */
function digits(text: string, from: number, to: number): number {
  let value = 0;
  for (let at = from; at < to; at += 1) value = value * 10 + text.charCodeAt(at) - ZERO;
  return value;
}

const DAYS = [31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];

function daysOf(year: number, month: number): number {
  const isLeap = year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0);
  return month === 2 && isLeap ? 29 : (DAYS[month - 1] ?? 0);
}

/** Whole milliseconds of the fraction that may follow the seconds. */
function fractionOf(text: string): number {
  if (text[19] !== '.') return 0;
  let end = 20;
  while (end < 23 && isDigit(text.charCodeAt(end))) end += 1;
  return digits(text, 20, end) * 10 ** (23 - end);
}

function isDigit(code: number): boolean {
  return code >= ZERO && code < ZERO + 10;
}

/** Minutes east of UTC; null where no clock can be. */
function offsetOf(text: string): number | null {
  const end = text.length;
  if (text[end - 1] === 'Z' || text[end - 1] === 'z') return 0;
  const [hours, minutes] = [digits(text, end - 5, end - 3), digits(text, end - 2, end)];
  if (hours > 23 || minutes > 59) return null;
  return (hours * 60 + minutes) * (text[end - 6] === '-' ? -1 : 1);
}
