import {
  aarIdentity,
  isAmbiguousMark,
  isContainerMark,
  isoIdentity,
  uicIdentity,
} from './identity.js';
import type { Identity } from './identity.js';
import { uicCheckDigit } from './uic.js';

export type UnitFault = 'empty' | 'form' | 'mark' | 'number' | 'check-digit';

/** What `parseUnit` made of a text. */
export type ParsedUnit =
  | { kind: 'unit'; identity: Identity }
  /** Digits without letters: `numbers` are the identity numbers they may stand for. */
  | { kind: 'number'; digits: string; numbers: string[] }
  /** `detail` is a sentence for the person who typed it. */
  | { kind: 'wrong'; fault: UnitFault; detail: string };

const SEPARATORS = /[\s./_\u2010-\u2015-]+/g;
const COUNTS = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine'];
const EXAMPLES = 'QTKX 40127, ZQXU 305438 1 or 21 81 2471 217-3';

function count(length: number): string {
  return COUNTS[length] ?? String(length);
}

function wrong(fault: UnitFault, detail: string): ParsedUnit {
  return { kind: 'wrong', fault, detail };
}

function unit(identity: Identity): ParsedUnit {
  return { kind: 'unit', identity };
}

function wrongDigit(written: string, right: number, given: string): ParsedUnit {
  return wrong('check-digit', `${written} ends in ${right}, not ${given}.`);
}

function parseDigits(digits: string): ParsedUnit {
  if (digits.length === 12) {
    const check = uicCheckDigit(digits.slice(0, 11));
    if (String(check) === digits.slice(11)) return unit(uicIdentity(digits));
    return wrongDigit(uicIdentity(digits).display.slice(0, -2), check, digits.slice(11));
  }
  if (digits.length > 7) {
    return wrong('number', `A wagon number has 12 digits; this has ${digits.length}.`);
  }
  const serial = digits.length === 7 ? digits.slice(0, 6) : digits;
  const numbers = [String(Number(serial)), serial.padStart(6, '0')];
  return { kind: 'number', digits, numbers: [...new Set(numbers)] };
}

function parseContainer(mark: string, digits: string): ParsedUnit {
  if (digits.length > 7) {
    return wrong(
      'number',
      `A container number has six digits and a check digit; this has ${count(digits.length)}.`,
    );
  }
  const identity = isoIdentity(mark, Number(digits.slice(0, 6)));
  const check = identity.compact.slice(-1);
  if (digits.length < 7 || digits.endsWith(check)) return unit(identity);
  return wrongDigit(`${mark} ${identity.number}`, Number(check), digits.slice(6));
}

function parseMarked(mark: string, digits: string): ParsedUnit {
  if (mark.length > 4) {
    return wrong('mark', `A mark has at most four letters; ${mark} has ${count(mark.length)}.`);
  }
  if (isContainerMark(mark) || (isAmbiguousMark(mark) && digits.length === 7)) {
    return parseContainer(mark, digits);
  }
  if (digits.length > 6) {
    return wrong(
      'number',
      `A car number has at most six digits; this has ${count(digits.length)}.`,
    );
  }
  return unit(aarIdentity(mark, Number(digits)));
}

/**
 * Reads what a person types for a unit: any case, separators and zero padding; a container with
 * or without its check digit; a number alone. Never throws.
 */
export function parseUnit(text: string): ParsedUnit {
  const joined = text.replace(SEPARATORS, '');
  if (joined === '') return wrong('empty', `Write a mark and number, like ${EXAMPLES}.`);
  if (joined.length > 32) return wrong('form', 'That is too long for the number of a car or box.');
  if (!/^[0-9A-Za-z]+$/.test(joined)) {
    return wrong('form', `Only letters and digits belong in a number, like ${EXAMPLES}.`);
  }
  const upper = joined.toUpperCase();
  if (/^[0-9]+$/.test(upper)) return parseDigits(upper);
  if (/^[A-Z]+$/.test(upper)) {
    return upper.length > 4
      ? parseMarked(upper, '')
      : wrong('number', `The number after ${upper} is missing.`);
  }
  const [, mark, digits] = /^([A-Z]+)([0-9]+)$/.exec(upper) ?? [];
  if (mark !== undefined && digits !== undefined) return parseMarked(mark, digits);
  const [, before, after] = /^([0-9]{1,7})([A-Z]{1,4})$/.exec(upper) ?? [];
  if (before !== undefined && after !== undefined) {
    return wrong('form', `The letters come first: ${after} ${before}.`);
  }
  return wrong('form', `Letters and digits are mixed; write it like ${EXAMPLES}.`);
}
