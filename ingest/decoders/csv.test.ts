import { describe, expect, it } from 'vitest';
import { decodeCsv, decodeCsvSteps } from './csv';
import type { CsvOptions } from './csv';
import { cutRecording, runAtOnce, runInSteps } from './recording';
import type { Recording } from './recording';

const csv = (text: string, options?: CsvOptions) => decodeCsv(Buffer.from(text), options);

function recording(text: string, options?: CsvOptions): Recording {
  const result = csv(text, options);
  if (!result.ok) throw new Error(result.issue.detail);
  return result.recording;
}

describe('CSV', () => {
  it('reads seconds and volts, and drops unit suffixes', () => {
    expect(recording('t_s,A_V,B\r\n0.5,1.25,-2e-3\r\n0.6,1.5,.5\r\n0.7,1.75,+3\r\n')).toEqual({
      rateHz: 2 / (0.7 - 0.5),
      timeS: 0.5,
      channels: ['A', 'B'],
      length: 3,
      pieces: [[Float64Array.of(1.25, 1.5, 1.75), Float64Array.of(-0.002, 0.5, 3)]],
    });
  });

  it.each(['t', 't_s', 'time', 'time_s'])('takes %s as the time', (name) => {
    expect(recording(`${name},A\n0,1\n1,2`).rateHz).toBe(1);
  });

  it.each([
    ['line feeds', 't,A\n0,1\n1,2\n'],
    ['carriage returns', 't,A\r0,1\r1,2\r'],
    ['both', 't,A\r\n0,1\r\n1,2'],
    ['a byte order mark', '\ufefft,A\n0,1\n1,2\n'],
    ['quotation marks', '"t","A"\n"0","1"\n"1","2"\n'],
    ['spaces and empty lines', 't, A\n0, 1\n\n1 ,2\n\n'],
  ])('takes %s', (_, text) => {
    expect(recording(text)).toMatchObject({ channels: ['A'], length: 2, pieces: [[Float64Array.of(1, 2)]] });
  });

  it('unquotes as RFC 4180 says (K55)', () => {
    expect(recording('t,"a""b,c\r\nd"\n0,1\n1,2').channels).toEqual(['a"b,c\r\nd']);
  });

  it('reads codes', () => {
    expect(recording('t,A\n0,12\n1,-7\n', { codes: true }).pieces).toEqual([[Int32Array.of(12, -7)]]);
    expect(csv('t,A\n0,12\n1,7.5\n', { codes: true })).toMatchObject({
      ok: false,
      issue: { at: 'row 2', status: 422 },
    });
    expect(csv('t,A\n0,2147483648\n', { codes: true, rateHz: 1 })).toMatchObject({
      ok: false,
      issue: { at: 'row 1' },
    });
  });

  it('takes the rate that is given, and one row will do then', () => {
    expect(recording('t,A\n7,1\n', { rateHz: 20000 })).toMatchObject({ rateHz: 20000, timeS: 7, length: 1 });
    expect(csv('t,A\n7,1\n')).toMatchObject({ ok: false, issue: { slug: 'invalid' } });
    expect(csv('t,A\n7,1\n', { rateHz: 0.5 })).toMatchObject({ ok: false, issue: { pointer: '/rate' } });
  });

  it('goes on at the rate of its stream where the times agree with it, and only there', () => {
    const text = 't,A\n0.003,1\n0.006,1\n0.009,1\n';
    expect(recording(text, { streamRateHz: 360 }).rateHz).toBe(360);
    expect(recording('t,A\n0,1\n0.01,1\n', { streamRateHz: 360 }).rateHz).toBe(100);
  });

  describe('uneven rows: off by more than 1 % of the step and half a unit of the last decimal', () => {
    const rows = (third: string): string => `t,A\n0,1\n0.1,1\n${third},1\n0.3,1\n`;
    // Step 0.1 s, so 1 % of it is 0.001 s; the third row should stand at 0.2 s.
    it.each([
      ['0.2', true],
      ['0.21', false],
      ['0.201', true],
      ['0.202', false],
      ['0.199', true],
      ['0.198', false],
      ['0.2010', true],
      ['0.2011', false],
      ['0.20100', true],
      ['0.20101', false],
      ['2e-1', true],
      ['2.01e-1', true],
      ['2.02e-1', false],
      ['201e-3', true],
      ['.2', true],
      ['0.3', false],
    ])('a third row at %s: taken is %s', (third, taken) => {
      const result = csv(rows(third), { rateHz: 10 });
      if (taken) expect(result).toMatchObject({ ok: true, recording: { length: 4 } });
      else expect(result).toMatchObject({ ok: false, issue: { slug: 'invalid', status: 422, at: 'row 3' } });
    });

    it('names the first such row', () => {
      const text =
        't,A\n' + Array.from({ length: 100 }, (_, i) => `${i === 41 || i === 60 ? i + 0.7 : i},1\n`).join('');
      expect(csv(text)).toMatchObject({ ok: false, issue: { at: 'row 42' } });
    });

    it('takes times that were rounded when written, at a rate that is not round', () => {
      const text =
        't_s,ecg\n' + Array.from({ length: 5000 }, (_, i) => `${(i / 360).toFixed(5)},0\n`).join('');
      expect(recording(text).rateHz).toBeCloseTo(360, 2);
    });
  });

  it.each([
    ['no header', '0,1\n1,2\n', 'line 1'],
    ['no channel', 't\n0\n1\n', 'line 1'],
    ['a channel twice', 't,A,A_V\n0,1,1\n', 'line 1'],
    ['a channel without a name', 't,A,\n0,1,1\n', 'line 1'],
    ['millivolts', 't,A_mV\n0,1\n', 'line 1'],
    ['a short row', 't,A,B\n0,1,2\n1,1\n', 'row 2'],
    ['a long row', 't,A\n0,1\n1,1,1\n', 'row 2'],
    ['a word', 't,A\n0,1\n1,one\n', 'row 2'],
    ['an empty field', 't,A\n0,\n', 'row 1'],
    ['NaN', 't,A\n0,NaN\n', 'row 1'],
    ['infinity', 't,A\n0,1e999\n', 'row 1'],
    ['more than a million volts', 't,A\n0,1000000\n1,-1000000.1\n', 'row 2'],
    ['hexadecimal', 't,A\n0,0x10\n', 'row 1'],
    ['a time that is no number', 't,A\nnoon,1\n', 'row 1'],
  ])('refuses %s', (_, text, at) => {
    expect(csv(text)).toMatchObject({ ok: false, issue: { slug: 'invalid', status: 422, at } });
  });

  it('refuses times that do not advance, and no rows', () => {
    expect(csv('t,A\n1,1\n1,1\n').ok).toBe(false);
    expect(csv('t,A\n2,1\n1,1\n').ok).toBe(false);
    expect(csv('t,A\n')).toMatchObject({ ok: false, issue: { status: 422 } });
    expect(csv('')).toMatchObject({ ok: false, issue: { slug: 'unreadable', status: 400 } });
  });

  it('says at which line a body stops being CSV', () => {
    expect(csv('t,A\n0,1\n1,"2"x\n')).toMatchObject({
      ok: false,
      issue: { slug: 'unreadable', at: 'line 3' },
    });
    expect(csv('t,A\n0,1\n1,"2\n')).toMatchObject({ ok: false, issue: { slug: 'unreadable' } });
    expect(csv('t,A\n0,1\n' + '1'.repeat(300_000))).toMatchObject({
      ok: false,
      issue: { slug: 'unreadable' },
    });
  });

  it('reads a long body in steps, into pieces of a block’s length', async () => {
    const rows = 150_000;
    const text =
      't,A,B\n' + Array.from({ length: rows }, (_, i) => `${(i / 1000).toFixed(3)},${i},${-i}\n`).join('');
    let pauses = 0;
    const result = await runInSteps(decodeCsvSteps(Buffer.from(text), {}), async () => {
      pauses++;
    });
    if (!result.ok) throw new Error(result.issue.detail);
    expect(pauses).toBeGreaterThan(text.length / (64 * 1024));
    expect(result).toEqual(runAtOnce(decodeCsvSteps(Buffer.from(text), {})));
    expect(result.recording.pieces.map((piece) => piece[0]!.length)).toEqual([65_536, 65_536, 18_928]);
    const cut = cutRecording(result.recording, 's', 7);
    if (!cut.ok) throw new Error(cut.issue.detail);
    expect(cut.blocks.map(({ seq, timeS, length }) => ({ seq, timeS, length }))).toEqual([
      { seq: 7, timeS: 0, length: 65_536 },
      { seq: 8, timeS: 65.536, length: 65_536 },
      { seq: 9, timeS: 131.072, length: 18_928 },
    ]);
    const all = cut.blocks.flatMap(({ channels }) => Array.from(channels[1]!.samples));
    expect(all.every((value, i) => value === 0 - i)).toBe(true);
    expect(cutRecording(result.recording, 's', 2 ** 32 - 3).ok).toBe(true);
    expect(cutRecording(result.recording, 's', 2 ** 32 - 2).ok).toBe(false);
  });
});
