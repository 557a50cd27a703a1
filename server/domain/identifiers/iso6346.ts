/** ISO 6346 Annex A: letters take 10 to 38 without the multiples of 11. */
const LETTER_VALUES = Array.from({ length: 29 }, (_, index) => index + 10).filter(
  (value) => value % 11 !== 0,
);

function valueOf(character: string): number {
  const code = character.charCodeAt(0);
  return code < 65 ? code - 48 : (LETTER_VALUES[code - 65] ?? 0);
}

/**
 * The check digit of a container number without it: four letters and six digits, upper case.
 * ISO 6346:1995, Annex A: weights 2^0 to 2^9 from the left, modulo 11, 10 counting as 0.
 * Throws on any other form.
 */
export function iso6346CheckDigit(ownerAndSerial: string): number {
  if (!/^[A-Z]{4}[0-9]{6}$/.test(ownerAndSerial)) {
    throw new Error('A container number is four letters and six digits before its check digit.');
  }
  const sum = [...ownerAndSerial].reduce(
    (total, character, index) => total + valueOf(character) * 2 ** index,
    0,
  );
  return (sum % 11) % 10;
}
