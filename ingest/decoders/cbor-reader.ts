/**
 * A bounded reader of CBOR (RFC 8949). Every count is checked against the bytes left before anything is allocated, and
 * nesting is limited, so a hostile message costs no more than its own length. Own code, because general libraries
 * accept what the hub must refuse (duplicate keys, reserved tags) and because this is the hot path.
 */

import { CborFault, CborSimple, CborTag, halfToNumber, keyId } from './cbor-values';
import type { CborValue } from './cbor-values';

export const indefinite = -1;
const maxDepth = 8;
const utf8 = new TextDecoder('utf-8', { fatal: true, ignoreBOM: true });
const truncated = 'The message ends within a data item.';

export class CborReader {
  readonly bytes: Uint8Array;
  private lazyView: DataView | undefined;
  pos = 0;
  readonly end: number;
  /** Of the head read last: major type, additional information, argument (`indefinite` where it has none). */
  major = 0;
  info = 0;
  arg = 0;
  /** Of the item skipped last: the deepest nesting within it. */
  skippedDepth = 0;
  private readonly open: number[] = [];

  constructor(bytes: Uint8Array) {
    this.bytes = bytes;
    this.end = bytes.byteLength;
  }

  get view(): DataView {
    return (this.lazyView ??= new DataView(this.bytes.buffer, this.bytes.byteOffset, this.bytes.byteLength));
  }

  unreadable(detail: string, at = this.pos): CborFault {
    return new CborFault('unreadable', detail, at);
  }

  /** Reads the next head and gives its major type. An argument above 2^53 loses its last bits; `argBig` has them. */
  head(): number {
    const pos = this.pos;
    if (pos >= this.end) throw this.unreadable(truncated);
    const first = this.bytes[pos]!;
    const info = first & 31;
    this.major = first >> 5;
    this.info = info;
    if (info < 24) {
      this.arg = info;
      this.pos = pos + 1;
      return this.major;
    }
    this.longHead(pos, info);
    return this.major;
  }

  private longHead(pos: number, info: number): void {
    const size = info === 24 ? 1 : info === 25 ? 2 : info === 26 ? 4 : info === 27 ? 8 : 0;
    if (pos + 1 + size > this.end) throw this.unreadable(truncated, pos);
    this.pos = pos + 1 + size;
    if (size === 1) this.arg = this.bytes[pos + 1]!;
    else if (size === 2) this.arg = (this.bytes[pos + 1]! << 8) | this.bytes[pos + 2]!;
    else if (size === 4) this.arg = this.view.getUint32(pos + 1);
    else if (size === 8) this.arg = this.view.getUint32(pos + 1) * 2 ** 32 + this.view.getUint32(pos + 5);
    else if (info === 31 && this.major !== 0 && this.major !== 1 && this.major !== 6) this.arg = indefinite;
    else throw this.unreadable('A data item starts with a reserved byte.', pos);
  }

  /** The argument of an eight-byte head just read, exactly. */
  argBig(): bigint {
    return this.info === 27 ? this.view.getBigUint64(this.pos - 8) : BigInt(this.arg);
  }

  /** Whether the next byte ends an item of indefinite length; if so it is taken. */
  takeBreak(): boolean {
    if (this.pos >= this.end) throw this.unreadable(truncated);
    if (this.bytes[this.pos] !== 0xff) return false;
    this.pos++;
    return true;
  }

  /** Takes `length` bytes of content and returns where they start. */
  content(length: number): number {
    const start = this.pos;
    if (length > this.end - start) throw this.unreadable(truncated, start);
    this.pos = start + length;
    return start;
  }

  /** Checks that `items` further items (of at least one byte each) can follow. */
  checkCount(items: number): void {
    if (items > this.end - this.pos) throw this.unreadable('A count is larger than the message.');
  }

  /** The text whose head was just read. */
  text(): string {
    if (this.arg === indefinite) return this.chunks(3, (start, stop) => this.utf8(start, stop)).join('');
    const start = this.content(this.arg);
    const stop = this.pos;
    if (stop - start <= 24) {
      let text = '';
      let i = start;
      for (; i < stop; i++) {
        const byte = this.bytes[i]!;
        if (byte > 127) break;
        text += String.fromCharCode(byte);
      }
      if (i === stop) return text;
    }
    return this.utf8(start, stop);
  }

  /** The byte string whose head was just read: a view on the message, or a copy where it came in chunks. */
  byteString(): Uint8Array {
    if (this.arg !== indefinite) {
      const start = this.content(this.arg);
      return this.bytes.subarray(start, this.pos);
    }
    const parts = this.chunks(2, (start, stop) => this.bytes.subarray(start, stop));
    const whole = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
    let offset = 0;
    for (const part of parts) {
      whole.set(part, offset);
      offset += part.length;
    }
    return whole;
  }

  /** The number whose head was just read, or undefined where the item is no number. */
  number(): number | undefined {
    if (this.major === 0) return this.arg;
    if (this.major === 1) return -1 - this.arg;
    if (this.major !== 7) return undefined;
    if (this.info === 25) return halfToNumber(this.arg);
    if (this.info === 26) return this.view.getFloat32(this.pos - 4);
    if (this.info === 27) return this.view.getFloat64(this.pos - 8);
    return undefined;
  }

  /**
   * Moves past one item of any kind, checking that it is well-formed, without recursion. Nesting beyond `limit` is
   * unreadable.
   */
  skip(limit = 2 ** 20): void {
    const open = this.open;
    open.length = 0;
    let deepest = 0;
    for (;;) {
      this.head();
      const major = this.major;
      if (major === 6) continue;
      if (major === 4 || major === 5) {
        if (open.length >= limit) throw this.unreadable('The message is nested too deeply.');
        const step = major - 3;
        if (this.arg === indefinite) open.push(major === 4 ? -1 : -2);
        else {
          this.checkCount(this.arg * step);
          open.push(this.arg * step);
        }
        if (open.length > deepest) deepest = open.length;
      } else {
        this.skipLeaf(major);
        this.closeItem(open);
      }
      this.closeFull(open);
      if (open.length === 0) break;
    }
    this.skippedDepth = deepest;
  }

  private skipLeaf(major: number): void {
    if (major === 2 || major === 3) {
      if (this.arg === indefinite) this.chunks(major, () => undefined);
      else this.content(this.arg);
    } else if (major === 7) this.checkSimple();
  }

  private checkSimple(): void {
    if (this.info === 31) throw this.unreadable('A break stands where a data item should.', this.pos - 1);
    if (this.info === 24 && this.arg < 32)
      throw this.unreadable('A simple value is written in a reserved form.', this.pos - 2);
  }

  /** Counts one finished item in the innermost open one: a positive count is what is left, -1 an indefinite array, -2 an indefinite map before a key, -3 before a value. */
  private closeItem(open: number[]): void {
    const top = open.length - 1;
    if (top < 0) return;
    const left = open[top]!;
    if (left > 0) open[top] = left - 1;
    else if (left < -1) open[top] = left === -2 ? -3 : -2;
  }

  private closeFull(open: number[]): void {
    while (open.length > 0) {
      const left = open[open.length - 1]!;
      if (left > 0) return;
      if (left < 0) {
        if (!this.takeBreak()) return;
        if (left === -3) throw this.unreadable('A map ends after a key without its value.', this.pos - 1);
      }
      open.pop();
      this.closeItem(open);
    }
  }

  /** Any item as a value, for small messages and for records. Duplicate keys are `invalid`. */
  value(depth = 0): CborValue {
    this.head();
    const start = this.pos;
    switch (this.major) {
      case 0:
        return this.arg > Number.MAX_SAFE_INTEGER ? this.argBig() : this.arg;
      case 1:
        return this.arg >= Number.MAX_SAFE_INTEGER ? -1n - this.argBig() : -1 - this.arg;
      case 2:
        return this.byteString();
      case 3:
        return this.text();
      case 7:
        return this.simpleOrFloat();
    }
    if (depth >= maxDepth) throw this.unreadable('The message is nested too deeply.', start);
    if (this.major === 4) return this.array(depth);
    if (this.major === 5) return this.map(depth);
    const tag = this.arg > Number.MAX_SAFE_INTEGER ? this.argBig() : this.arg;
    return new CborTag(tag, this.value(depth + 1));
  }

  private simpleOrFloat(): CborValue {
    this.checkSimple();
    switch (this.info) {
      case 20:
        return false;
      case 21:
        return true;
      case 22:
        return null;
      case 23:
        return undefined;
      default:
        return this.number() ?? new CborSimple(this.arg);
    }
  }

  private array(depth: number): CborValue[] {
    const items: CborValue[] = [];
    const count = this.arg;
    if (count === indefinite) while (!this.takeBreak()) items.push(this.value(depth + 1));
    else {
      this.checkCount(count);
      for (let i = 0; i < count; i++) items.push(this.value(depth + 1));
    }
    return items;
  }

  private map(depth: number): Map<CborValue, CborValue> {
    const map = new Map<CborValue, CborValue>();
    const seen = new Set<string>();
    // Told only when the map has proved well-formed.
    let twice: number | undefined;
    const count = this.arg;
    if (count !== indefinite) this.checkCount(count * 2);
    for (let i = 0; count === indefinite ? !this.takeBreak() : i < count; i++) {
      const at = this.pos;
      const key = this.value(depth + 1);
      const id = keyId(key);
      if (seen.has(id)) twice ??= at;
      seen.add(id);
      if (this.pos < this.end && this.bytes[this.pos] === 0xff)
        throw this.unreadable('A map ends after a key without its value.');
      map.set(key, this.value(depth + 1));
    }
    if (twice !== undefined) throw new CborFault('invalid', 'A key of a map appears twice.', twice);
    return map;
  }

  private utf8(start: number, stop: number): string {
    try {
      return utf8.decode(this.bytes.subarray(start, stop));
    } catch {
      throw new CborFault('invalid', 'A text is not valid UTF-8.', start);
    }
  }

  private chunks<T>(major: number, take: (start: number, stop: number) => T): T[] {
    const parts: T[] = [];
    while (!this.takeBreak()) {
      const at = this.pos;
      this.head();
      if (this.major !== major || this.arg === indefinite)
        throw this.unreadable('A string of indefinite length holds something else than its parts.', at);
      const start = this.content(this.arg);
      parts.push(take(start, this.pos));
    }
    return parts;
  }
}
