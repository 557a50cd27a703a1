/**
 * A random UUID (version 4). `crypto.randomUUID` is missing on pages that a yard serves without
 * TLS; random bytes are there on every page.
 */
export function makeId(): string {
  const bytes = crypto.getRandomValues(new Uint8Array(16)).map((byte, place) => {
    if (place === 6) return (byte & 0x0f) | 0x40;
    return place === 8 ? (byte & 0x3f) | 0x80 : byte;
  });
  const hex = Array.from(bytes, (byte) => byte.toString(16).padStart(2, '0')).join('');
  return hex.replace(/^(.{8})(.{4})(.{4})(.{4})(.{12})$/, '$1-$2-$3-$4-$5');
}
