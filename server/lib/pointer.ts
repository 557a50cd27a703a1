/** JSON pointer (RFC 6901) of a path of keys; the whole document is the empty text. */
export function pointerOf(path: readonly PropertyKey[]): string {
  return path.map((key) => `/${String(key).replaceAll('~', '~0').replaceAll('/', '~1')}`).join('');
}
