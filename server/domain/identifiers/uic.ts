/**
 * The twelfth digit of a wagon number, from its first eleven: Luhn from the right with
 * 2, 1, 2, … (UIC 438-2, EVN). Throws on any other form.
 */
export function uicCheckDigit(firstEleven: string): number {
  if (!/^[0-9]{11}$/.test(firstEleven)) {
    throw new Error('A wagon number has eleven digits before its check digit.');
  }
  const sum = [...firstEleven].reduce((total, digit, index) => {
    const product = Number(digit) * (index % 2 === 0 ? 2 : 1);
    return total + (product > 9 ? product - 9 : product);
  }, 0);
  return (10 - (sum % 10)) % 10;
}
