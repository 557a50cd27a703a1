import { bcryptCompare, bcryptHash } from './bcrypt-thread.js';

const COST = 10;
/** bcrypt reads no further than this; longer passwords are refused rather than cut. */
export const MOST_PASSWORD_BYTES = 72;

export const passwordBytes = (password: string) => Buffer.byteLength(password, 'utf8');

/** Hashes a password of 72 bytes at most. */
export function hashPassword(password: string): Promise<string> {
  if (passwordBytes(password) > MOST_PASSWORD_BYTES) {
    throw new RangeError('A password has at most 72 bytes.');
  }
  return bcryptHash(password, COST);
}

/** The hash of nobody's password, of the usual cost. */
const nobody = '$2b$10$3iPYhxftH1iXjwe2n29FheKmd5No5EhFLp9EBwLP09WirSmAWvEHG';

/**
 * True when the password fits the hash. Without a hash it takes as long and is false, so that
 * the time tells nobody which addresses are known.
 */
export async function isPassword(password: string, hash: string | null): Promise<boolean> {
  const fits = await bcryptCompare(password, hash ?? nobody);
  return fits && hash !== null && passwordBytes(password) <= MOST_PASSWORD_BYTES;
}
