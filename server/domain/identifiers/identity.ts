import { iso6346CheckDigit } from './iso6346.js';

export type Scheme = 'aar' | 'iso6346' | 'uic';

/** What is written on a unit's side, in every form that the product stores or shows. */
export interface Identity {
  /** The `unitId` of the interface: `QTKX40127`, `ZQXU3054381`, `218124712173`. */
  compact: string;
  scheme: Scheme;
  /** Letters only; empty for a wagon number. */
  mark: string;
  /** Digits: without padding (aar), six (iso6346), twelve (uic). */
  number: string;
  /** For people: `QTKX 40127`, `ZQXU 305438 1`, `21 81 2471 217-3`. */
  display: string;
}

/** A car's mark (1 to 4 capitals) with its number (0 to 999999). */
export function aarIdentity(mark: string, number: number): Identity {
  const digits = String(number);
  return {
    compact: `${mark}${digits}`,
    scheme: 'aar',
    mark,
    number: digits,
    display: `${mark} ${digits}`,
  };
}

/** A container's four letters with its serial (0 to 999999); the check digit is computed. */
export function isoIdentity(ownerCode: string, serial: number): Identity {
  const digits = String(serial).padStart(6, '0');
  const check = iso6346CheckDigit(`${ownerCode}${digits}`);
  return {
    compact: `${ownerCode}${digits}${check}`,
    scheme: 'iso6346',
    mark: ownerCode,
    number: digits,
    display: `${ownerCode} ${digits} ${check}`,
  };
}

/** A wagon number of twelve digits, its check digit taken as given. */
export function uicIdentity(digits: string): Identity {
  const groups = [
    digits.slice(0, 2),
    digits.slice(2, 4),
    digits.slice(4, 8),
    `${digits.slice(8, 11)}-${digits.slice(11)}`,
  ];
  return { compact: digits, scheme: 'uic', mark: '', number: digits, display: groups.join(' ') };
}

/** True for four letters that always name a container: the fourth is U. */
export function isContainerMark(mark: string): boolean {
  return /^[A-Z]{3}U$/.test(mark);
}

/** True for the ISO 6346 categories that a mark by itself does not settle: J and Z. */
export function isAmbiguousMark(mark: string): boolean {
  return /^[A-Z]{3}[JZ]$/.test(mark);
}
