/** From when until before when something holds; null: without that bound. */
export interface Validity {
  validFrom: Date | null;
  validTo: Date | null;
}

/** True when there is an instant at which both hold. */
export function overlaps(a: Validity, b: Validity): boolean {
  return begin(a) < end(b) && begin(b) < end(a);
}

/** True at an instant in between; the end is not part of it. */
export function holdsAt(validity: Validity, at: Date): boolean {
  return begin(validity) <= at.getTime() && at.getTime() < end(validity);
}

/** Where it begins in ms; minus infinity without a bound. */
export const begin = ({ validFrom }: Validity): number => validFrom?.getTime() ?? -Infinity;

/** Where it ends in ms; infinity without a bound. */
export const end = ({ validTo }: Validity): number => validTo?.getTime() ?? Infinity;
