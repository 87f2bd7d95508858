/** The values of CBOR that JavaScript has no type for, and what can be wrong with a message. */

/** Thrown inside the decoders only; their public functions turn it into an issue. */
export class CborFault {
  constructor(
    /** `unreadable`: not well-formed. `invalid`: well-formed, but not what is asked for. */
    readonly kind: 'unreadable' | 'invalid' | 'too-large',
    readonly detail: string,
    readonly at: number,
    readonly pointer?: string,
  ) {}
}

export class CborTag {
  constructor(
    readonly tag: number | bigint,
    readonly value: CborValue,
  ) {}
}

export class CborSimple {
  constructor(readonly code: number) {}
}

export type CborValue =
  | number
  | bigint
  | string
  | boolean
  | null
  | undefined
  | Uint8Array
  | CborValue[]
  | Map<CborValue, CborValue>
  | CborTag
  | CborSimple;

/** Tells equal keys apart from different ones, whatever their encoding. */
export function keyId(key: CborValue): string {
  if (typeof key === 'string') return 't' + key;
  if (typeof key === 'number') return Object.is(key, -0) ? 'n-0' : 'n' + key;
  if (typeof key === 'bigint') return 'n' + key;
  if (key instanceof Uint8Array) return 'b' + key.join();
  if (Array.isArray(key)) return 'a' + JSON.stringify(key.map(keyId));
  if (key instanceof Map)
    return 'm' + JSON.stringify([...key].map(([k, v]) => keyId(k) + '=' + keyId(v)).sort());
  if (key instanceof CborTag) return 'g' + key.tag + ':' + keyId(key.value);
  if (key instanceof CborSimple) return 's' + key.code;
  return 'c' + String(key);
}

/** IEEE 754 binary16, RFC 8949 appendix D. */
export function halfToNumber(bits: number): number {
  const exponent = (bits >> 10) & 31;
  const fraction = bits & 1023;
  const magnitude =
    exponent === 0
      ? fraction * 2 ** -24
      : exponent === 31
        ? fraction === 0
          ? Infinity
          : NaN
        : (1024 + fraction) * 2 ** (exponent - 25);
  return bits & 0x8000 ? -magnitude : magnitude;
}
