import * as fc from 'fast-check';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { createCaptureStore } from '../captures';
import type { CaptureMeta } from '../captures';
import type { Databases } from '../open';
import { captureMeta, inMemory } from '../test-support/rig';
import { deleteCapture, getCapture, listCaptures, setCaptureFindings, updateCapture } from './captures';
import type { CaptureFilter } from './captures';
import { fullTextQuery } from './full-text';
import { decodeCursor, firstPage } from './page';
import type { Cursor } from './page';

let databases: Databases;

beforeEach(() => {
  databases = inMemory();
});
afterEach(() => databases.close());

async function keep(over: Partial<CaptureMeta> = {}): Promise<string> {
  const source = [{ startIndex: 0, count: 2, channels: [{ name: 'A', samples: Int16Array.of(1, 2) }] }];
  const kept = await createCaptureStore(databases.db).keep({
    meta: captureMeta(over),
    source,
    gaps: [],
    fromIndex: 0,
  });
  return kept!.id;
}

async function titles(filter: CaptureFilter): Promise<string[]> {
  return (await listCaptures(databases.db, { ...firstPage, ...filter })).items.map((c) => c.title);
}

describe('listCaptures', () => {
  it('pages through all, newest first, each once, also where many were kept in one millisecond', async () => {
    const ids: string[] = [];
    for (let i = 0; i < 23; i++) ids.push(await keep({ nowMs: Math.floor(i / 5), title: `c${i}` }));
    for (const limit of [1, 4, 5, 22, 23, 100]) {
      const seen: string[] = [];
      const times: string[] = [];
      let cursor: Cursor | null = null;
      for (;;) {
        const page = await listCaptures(databases.db, { cursor, limit });
        expect(page.items.length).toBeLessThanOrEqual(limit);
        seen.push(...page.items.map((c) => c.id));
        times.push(...page.items.map((c) => c.createdAt));
        const next = decodeCursor(page.nextCursor);
        if (!next.ok) throw new Error(next.issue.code);
        if (next.value === null) break;
        cursor = next.value;
      }
      expect([...seen].sort()).toEqual([...ids].sort());
      expect(times).toEqual([...times].sort().reverse());
    }
  });

  it('gives at most 100', async () => {
    for (let i = 0; i < 101; i++) await keep();
    const page = await listCaptures(databases.db, { cursor: null, limit: 5000 });
    expect(page.items.length).toBe(100);
    expect(page.nextCursor).not.toBeNull();
  });

  it('filters by rig, tag, finding and words, together', async () => {
    const clipping = { code: 'clipping', severity: 'warn', count: 1 } as const;
    await keep({ title: 'one', rigId: 'r1', tags: ['cold'], findings: [clipping] });
    await keep({ title: 'two', rigId: 'r1', tags: ['cold', 'late'] });
    await keep({ title: 'three', rigId: 'r2', tags: ['late'], findings: [clipping] });
    expect((await titles({ rigId: 'r1' })).sort()).toEqual(['one', 'two']);
    expect((await titles({ tag: 'late' })).sort()).toEqual(['three', 'two']);
    expect((await titles({ finding: 'clipping' })).sort()).toEqual(['one', 'three']);
    expect(await titles({ rigId: 'r1', tag: 'cold', finding: 'clipping', q: 'one' })).toEqual(['one']);
    expect(await titles({ rigId: 'r1', tag: 'cold', finding: 'clipping', q: 'two' })).toEqual([]);
    expect(await titles({ tag: 'col' })).toEqual([]);
  });
});

describe('search', () => {
  beforeEach(async () => {
    await keep({ title: 'Run-up at −10 °C', note: 'Łódź bench; "slow" edge NOT seen', tags: ['gap 1.5 mm'] });
    await keep({ title: 'Grüße', note: 'nothing', rig: { ...captureMeta().rig, name: 'Mixer' } });
  });

  it.each([
    ['run', 1],
    ['run-up', 1],
    ['up run', 1],
    ['RUN', 1],
    ['un', 0],
    ['grusse', 0],
    ['grüße', 1],
    ['gru', 1],
    ['mixer', 1],
    ['winch', 1],
    ['1.5', 1],
    ['slow edge', 1],
    ['slow mixer', 0],
    ['NOT', 2],
    ['', 2],
    ['   ', 2],
    ['"', 0],
    ['*', 0],
    ['title:run', 0],
    ['run OR mixer', 0],
    ['run"', 1],
    ['"run" "up"', 1],
    ['run*', 1],
    ['NEAR(run up)', 0],
    ['^run', 1],
    ["run'; DROP TABLE capture; --", 0],
    ['run\0up', 1],
  ])('%j finds %i', async (q, count) => {
    expect((await titles({ q })).length).toBe(count);
  });

  it('never fails on what somebody types', async () => {
    const nasty = fc.array(
      fc.constantFrom(
        '"',
        "'",
        '*',
        '(',
        ')',
        ':',
        '^',
        '-',
        '+',
        '{',
        '}',
        'AND',
        'OR',
        'NOT',
        'NEAR',
        ' ',
        'a',
        '\0',
        '\ud800',
        '漢',
        '\\',
        '%',
        ',',
      ),
      {
        maxLength: 30,
      },
    );
    await fc.assert(
      fc.asyncProperty(
        fc.oneof(
          nasty.map((parts) => parts.join('')),
          fc.string({ unit: 'binary' }),
        ),
        async (q) => {
          expect(Array.isArray(await titles({ q }))).toBe(true);
        },
      ),
      { numRuns: 500 },
    );
  });

  it('takes at most 20 words', () => {
    expect(fullTextQuery('a '.repeat(500))?.split(' ').length).toBe(20);
  });
});

describe('changing a capture', () => {
  it('changes what is given and is found by its new words only', async () => {
    const id = await keep({ title: 'before', tags: ['old'], note: 'first' });
    const changed = await updateCapture(databases.db, id, { title: 'after', tags: ['new', 'newer'] });
    expect(changed).toMatchObject({ title: 'after', tags: ['new', 'newer'], note: 'first' });
    expect(await getCapture(databases.db, id)).toEqual(changed);
    expect(await titles({ q: 'before' })).toEqual([]);
    expect(await titles({ q: 'old' })).toEqual([]);
    expect(await titles({ q: 'after newer first' })).toEqual(['after']);
    expect(await updateCapture(databases.db, id, { tags: [] })).toMatchObject({ title: 'after', tags: [] });
    expect(await updateCapture(databases.db, 'no such', { title: 'x' })).toBeNull();
  });

  it('replaces its findings', async () => {
    const id = await keep({ findings: [{ code: 'clipping', severity: 'fault', count: 1 }] });
    const findings = [{ code: 'missing-tooth', severity: 'warn', count: 2 } as const];
    expect(await setCaptureFindings(databases.db, id, findings)).toBe(true);
    expect((await getCapture(databases.db, id))?.findings).toEqual(findings);
    expect(await titles({ finding: 'clipping' })).toEqual([]);
    expect(await setCaptureFindings(databases.db, 'no such', [])).toBe(false);
  });

  it('deletes all of it', async () => {
    const id = await keep({ title: 'gone', tags: ['t'] });
    expect(await deleteCapture(databases.db, id)).toBe(true);
    expect(await deleteCapture(databases.db, id)).toBe(false);
    expect(await getCapture(databases.db, id)).toBeNull();
    expect(await titles({ q: 'gone' })).toEqual([]);
    for (const table of ['capture_chunk', 'capture_tag', 'capture_text'] as const) {
      expect(await databases.db.selectFrom(table).selectAll().execute()).toEqual([]);
    }
  });
});

describe('decodeCursor', () => {
  it('takes nothing that it did not make', () => {
    const ofJson = (value: unknown) => Buffer.from(JSON.stringify(value)).toString('base64url');
    for (const text of [
      '',
      '!',
      'null',
      ofJson(null),
      ofJson([1]),
      ofJson(['a', 'b']),
      ofJson([1, 'b', 2]),
      ofJson({}),
      ofJson([null, 'x']),
    ]) {
      expect(decodeCursor(text), text).toEqual({ ok: false, issue: { code: 'bad-cursor' } });
    }
    expect(decodeCursor(undefined)).toEqual({ ok: true, value: null });
  });
});
