// Binding the values of thousands of rows costs three times what sending them as ready text does.
// These literals cannot hold a quote, whatever they are made from.

/** Any text as the bytes of its UTF-8; letters, digits and blanks go as they are. */
export function sqlBytes(text: string): string {
  if (/^[0-9A-Za-z ]*$/.test(text)) return `'${text}'`;
  return `X'${Buffer.from(text).toString('hex')}'`;
}

const MILLISECONDS = Array.from({ length: 1000 }, (_, ms) => String(ms).padStart(3, '0'));
let lastSecond = NaN;
let lastSecondText = '';

/** A UTC instant for a DATETIME(3); the host's own time zone plays no part. */
export function sqlInstant(ms: number): string {
  const second = Math.floor(ms / 1000);
  // Reads come in the order of time: most of them share their second with the one before.
  if (second !== lastSecond) {
    lastSecondText = new Date(second * 1000).toISOString().slice(0, 19);
    lastSecond = second;
  }
  return `'${lastSecondText}.${MILLISECONDS[ms - second * 1000]}'`;
}

/** One of our own codes, or NULL. Throws for anything that is not lower case and hyphens. */
export function sqlCode(code: string | null): string {
  if (code === null) return 'NULL';
  if (!/^[a-z-]+$/.test(code)) throw new Error('This is not a code.');
  return `'${code}'`;
}
