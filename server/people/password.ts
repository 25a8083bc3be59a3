import { randomBytes, scrypt, timingSafeEqual } from "node:crypto";
import { promisify } from "node:util";

const derive = promisify<string, Buffer, number, object, Buffer>(scrypt);

// RFC 7914 scrypt; N = 2^15, r = 8: 32 MB and some tens of milliseconds a try.
const cost = { N: 2 ** 15, r: 8, p: 1, maxmem: 64 * 1024 * 1024 };
const keyBytes = 32;
export const shortestPassword = 10;

export interface PasswordHash {
  salt: Buffer;
  hash: Buffer;
}

export async function hashPassword(password: string): Promise<PasswordHash> {
  const salt = randomBytes(16);
  return { salt, hash: await derive(password.normalize("NFKC"), salt, keyBytes, cost) };
}

export async function isPassword(password: string, { salt, hash }: PasswordHash): Promise<boolean> {
  return timingSafeEqual(await derive(password.normalize("NFKC"), salt, keyBytes, cost), hash);
}
