/** The first instant (UTC) of the month that is `months` after the one of `at`; before it if negative. */
export function monthStart(at: Date, months: number): Date {
  return new Date(Date.UTC(at.getUTCFullYear(), at.getUTCMonth() + months, 1));
}
