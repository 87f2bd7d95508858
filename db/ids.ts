import { randomBytes } from 'node:crypto';

// 32 letters and digits, none that reads like another.
const alphabet = 'abcdefghijkmnpqrstuvwxyz23456789';

/** A fresh random id: 20 characters, 100 bits, safe in a URL and on a command line. */
export function newId(): string {
  let id = '';
  for (const byte of randomBytes(20)) id += alphabet.charAt(byte & 31);
  return id;
}
