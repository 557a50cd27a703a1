import { createHash, randomBytes } from 'node:crypto';

/** A new token of 256 random bits, for readers and those who report. */
export const newAccessToken = (): string => randomBytes(32).toString('base64url');

/** SHA-256 of a token: what is stored of it. Random bits need neither salt nor a slow hash. */
export const hashAccessToken = (token: string): Buffer =>
  createHash('sha256').update(token).digest();

/** The token of an `Authorization: Bearer …` header; undefined when there is none. */
export const bearerToken = (header: string | undefined): string | undefined =>
  /^Bearer +(\S+) *$/i.exec(header ?? '')?.[1];
