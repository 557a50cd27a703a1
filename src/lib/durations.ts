const minutesADay = 1440;

/** "38 min", "2 h 11 min", "9 h", "4 d 2 h": two parts at most, minutes only under six hours. */
export function formatDuration(minutes: number): string {
  const whole = Math.max(0, Math.floor(minutes));
  if (whole < 60) return `${whole} min`;
  if (whole < 360) return joinParts(Math.floor(whole / 60), 'h', whole % 60, 'min');
  if (whole < minutesADay) return `${Math.floor(whole / 60)} h`;
  const hours = Math.floor((whole % minutesADay) / 60);
  return joinParts(Math.floor(whole / minutesADay), 'd', hours, 'h');
}

function joinParts(large: number, largeWord: string, small: number, smallWord: string): string {
  return small === 0 ? `${large} ${largeWord}` : `${large} ${largeWord} ${small} ${smallWord}`;
}

/** For sentences: "6 days", "1 day", "9 hours", "38 minutes". */
export function sayDuration(minutes: number): string {
  if (minutes < 60) return count(Math.max(0, Math.floor(minutes)), 'minute');
  if (minutes < 2 * minutesADay) return count(Math.floor(minutes / 60), 'hour');
  return count(Math.floor(minutes / minutesADay), 'day');
}

/** The number and its noun stay on one line. */
const count = (n: number, noun: string): string => `${n}\u00a0${noun}${n === 1 ? '' : 's'}`;

/** Minutes from an instant to now; never negative. */
export const minutesSince = (instant: string, now: number): number =>
  Math.max(0, (now - Date.parse(instant)) / 60_000);
