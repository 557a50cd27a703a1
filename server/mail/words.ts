const HOUR_MS = 3_600_000;

/** One line of plain text: what could end a header or a line becomes a blank. */
export function oneLine(text: string): string {
  return text
    .replace(/[\p{Cc}\p{Zl}\p{Zp}]+/gu, ' ')
    .replace(/ {2,}/g, ' ')
    .trim();
}

/** Text for HTML, attribute values included. */
export function escapeHtml(text: string): string {
  const entities: Record<string, string> = {
    '&': '&amp;',
    '<': '&lt;',
    '>': '&gt;',
    '"': '&quot;',
    "'": '&#39;',
  };
  return text.replace(/[&<>"']/g, (character) => entities[character] ?? character);
}

/** How long, rounded down: `50 min`, `26 h`, from three days on `4 d`. */
export function howLong(milliseconds: number): string {
  const hours = Math.floor(milliseconds / HOUR_MS);
  if (hours < 1) return `${Math.max(0, Math.floor(milliseconds / 60_000))} min`;
  return hours < 72 ? `${hours} h` : `${Math.floor(hours / 24)} d`;
}

/** An instant on the clock of a zone, with the zone's abbreviation: `Fri 27 Nov 2026 08:41 CST`. */
export function clockTime(instant: Date, timeZone: string): string {
  const parts = new Intl.DateTimeFormat('en-US', {
    timeZone,
    weekday: 'short',
    day: 'numeric',
    month: 'short',
    year: 'numeric',
    hour: '2-digit',
    minute: '2-digit',
    hourCycle: 'h23',
    timeZoneName: 'short',
  }).formatToParts(instant);
  const part = (type: Intl.DateTimeFormatPartTypes) =>
    parts.find((one) => one.type === type)?.value ?? '';
  return `${part('weekday')} ${part('day')} ${part('month')} ${part('year')} ${part('hour')}:${part('minute')} ${part('timeZoneName')}`;
}

const singular: Record<string, string> = {
  car: 'car',
  locomotive: 'locomotive',
  container: 'box',
  trailer: 'trailer',
  chassis: 'chassis',
  generatorSet: 'generator set',
  endOfTrain: 'end-of-train device',
};
const plural: Record<string, string> = { container: 'boxes', chassis: 'chassis' };

/** `3 cars`, `1 box`, `5 cars and boxes`; of other mixtures `4 pieces of equipment`. */
export function countOf(number: number, kinds: string[]): string {
  const [kind = 'other', ...others] = [...new Set(kinds)].sort();
  if (kind === 'car' && others.length === 1 && others[0] === 'container') {
    return `${number} cars and boxes`;
  }
  const one = others.length === 0 ? singular[kind] : undefined;
  if (!one) return number === 1 ? '1 piece of equipment' : `${number} pieces of equipment`;
  return number === 1 ? `1 ${one}` : `${number} ${plural[kind] ?? `${one}s`}`;
}
