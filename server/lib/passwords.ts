import bcrypt from 'bcryptjs';

const COST = 10;
/** bcrypt reads no further than this; longer passwords are refused rather than cut. */
export const MOST_PASSWORD_BYTES = 72;

export const passwordBytes = (password: string) => Buffer.byteLength(password, 'utf8');

/** Hashes a password of 72 bytes at most, in slices that leave the event loop free. */
export function hashPassword(password: string): Promise<string> {
  if (passwordBytes(password) > MOST_PASSWORD_BYTES) {
    throw new RangeError('A password has at most 72 bytes.');
  }
  return bcrypt.hash(password, COST);
}

let nobody: Promise<string> | undefined;

/**
 * True when the password fits the hash. Without a hash it takes as long and is false, so that
 * the time tells nobody which addresses are known.
 */
export async function isPassword(password: string, hash: string | null): Promise<boolean> {
  nobody ??= bcrypt.hash('nobody', COST);
  const fits = await bcrypt.compare(password, hash ?? (await nobody));
  return fits && hash !== null && passwordBytes(password) <= MOST_PASSWORD_BYTES;
}
