/**
 * What JSON.parse does not tell: where a text stops being JSON (RFC 8259), where the elements of an outer array stand, and
 * whether an object has a key twice.
 */
import { unreadable } from './result';
import type { IngestIssue } from '../block';

const strictUtf8 = new TextDecoder('utf-8', { fatal: true });

/** UTF-8 bytes as text, or the issue that they are none. */
export function textOf(bytes: Uint8Array): { ok: true; text: string } | { ok: false; issue: IngestIssue } {
  try {
    return { ok: true, text: strictUtf8.decode(bytes) };
  } catch {
    return { ok: false, issue: unreadable('The text is not valid UTF-8.', `byte ${firstBadByte(bytes)}`) };
  }
}

/** Start of the first byte sequence that is no UTF-8: the shortest bad prefix, by bisection. */
function firstBadByte(bytes: Uint8Array): number {
  let good = 0;
  let bad = bytes.length;
  while (bad - good > 1) {
    const middle = (good + bad) >> 1;
    try {
      // With `stream` a sequence that is only cut off is no error.
      new TextDecoder('utf-8', { fatal: true }).decode(bytes.subarray(0, middle), { stream: true });
      good = middle;
    } catch {
      bad = middle;
    }
  }
  return bad - 1;
}

/** How many strings of a JSON text stand before a colon, that is how many keys it has, duplicates included. */
export function countKeysInText(text: string): number {
  let count = 0;
  let at = text.indexOf('"');
  while (at >= 0) {
    const after = endOfString(text, at);
    if (text.charCodeAt(skipSpace(text, after)) === 58) count++;
    at = text.indexOf('"', after);
  }
  return count;
}

/** How many keys a parsed value has, without recursion. */
export function countKeysInValue(value: unknown): number {
  let count = 0;
  const open: unknown[] = [value];
  while (open.length > 0) {
    const next = open.pop();
    if (typeof next !== 'object' || next === null) continue;
    if (Array.isArray(next)) {
      for (const item of next) if (typeof item === 'object' && item !== null) open.push(item);
      continue;
    }
    const object = next as Record<string, unknown>;
    for (const key of Object.keys(object)) {
      count++;
      open.push(object[key]);
    }
  }
  return count;
}

/** Texts of the elements of an array, given a text that JSON.parse has read as an array. */
export function elementsOfArray(text: string): string[] {
  const elements: string[] = [];
  let depth = 0;
  let start = 0;
  for (let i = 0; i < text.length; i++) {
    const c = text.charCodeAt(i);
    if (c === 34) i = endOfString(text, i) - 1;
    else if (c === 91 || c === 123) {
      if (depth++ === 0) start = i + 1;
    } else if (c === 93 || c === 125) {
      if (--depth === 0) elements.push(text.slice(start, i));
    } else if (c === 44 && depth === 1) {
      elements.push(text.slice(start, i));
      start = i + 1;
    }
  }
  return elements;
}

/** Index just after the closing quote of the string that opens at `open`; the text's length where it never closes. */
function endOfString(text: string, open: number): number {
  let i = open + 1;
  for (;;) {
    const quote = text.indexOf('"', i);
    if (quote < 0) return text.length;
    let slashes = 0;
    while (quote - slashes > i && text.charCodeAt(quote - slashes - 1) === 92) slashes++;
    if (slashes % 2 === 0) return quote + 1;
    i = quote + 1;
  }
}

function skipSpace(text: string, from: number): number {
  let i = from;
  for (;;) {
    const c = text.charCodeAt(i);
    if (c !== 32 && c !== 10 && c !== 13 && c !== 9) return i;
    i++;
  }
}

const scalar =
  /(?:"(?:[^"\\\u0000-\u001f]|\\(?:["\\/bfnrt]|u[0-9a-fA-F]{4}))*"|-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?|true|false|null)/y;
const string = /"(?:[^"\\\u0000-\u001f]|\\(?:["\\/bfnrt]|u[0-9a-fA-F]{4}))*"/y;

/** Index of the first character at which the text is no JSON, or -1. For texts that JSON.parse has refused. */
export function whereJsonBreaks(text: string): number {
  const open: ('[' | '{')[] = [];
  let i = skipSpace(text, 0);
  let want: 'value' | 'value-or-end' | 'key' | 'key-or-end' | 'after' = 'value';
  const match = (pattern: RegExp): boolean => {
    pattern.lastIndex = i;
    if (!pattern.test(text)) return false;
    i = pattern.lastIndex;
    return true;
  };
  for (;;) {
    i = skipSpace(text, i);
    const c = text[i];
    if (want === 'after') {
      const inner = open.at(-1);
      if (inner === undefined) return i < text.length ? i : -1;
      if (c === ',') want = inner === '[' ? 'value' : 'key';
      else if (c === (inner === '[' ? ']' : '}')) open.pop();
      else return i;
      i++;
    } else if (want === 'key' || want === 'key-or-end') {
      if (c === '}' && want === 'key-or-end') {
        open.pop();
        want = 'after';
        i++;
        continue;
      }
      if (!match(string)) return i;
      i = skipSpace(text, i);
      if (text[i] !== ':') return i;
      i++;
      want = 'value';
    } else if (c === '[' || c === '{') {
      open.push(c);
      want = c === '[' ? 'value-or-end' : 'key-or-end';
      i++;
    } else if (c === ']' && want === 'value-or-end') {
      open.pop();
      want = 'after';
      i++;
    } else if (match(scalar)) want = 'after';
    else return i;
  }
}

/** A place in a text for people. */
export function placeOf(text: string, index: number): string {
  let line = 1;
  let lineStart = 0;
  for (let i = text.indexOf('\n'); i >= 0 && i < index; i = text.indexOf('\n', i + 1)) {
    line++;
    lineStart = i + 1;
  }
  return `line ${line}, column ${index - lineStart + 1}`;
}
