/** Real recordings against their independent counts (see `tests/fixtures/recordings/README.md`), with the fitted band. */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { analyse } from '@/signal/analysis';
import { recordings } from '../fixtures/recordings/settings';
import type { RecordingCase } from '../fixtures/recordings/settings';

type Truth = { annotated_beat_times_s?: number[]; computed: { find_peaks?: { times_s: number[] } } };

function file(recording: RecordingCase, name: string): string {
  return readFileSync(new URL(`../fixtures/recordings/${recording.name}/${name}`, import.meta.url), 'utf8');
}

function columns(recording: RecordingCase): Float64Array[] {
  const rows = file(recording, `${recording.name}.csv`).trim().split(/\r?\n/).slice(1);
  return recording.channels.map((_, c) => Float64Array.from(rows, (row) => Number(row.split(',')[c + 1])));
}

describe('real recordings', () => {
  it.each(recordings.map((recording) => [recording.name, recording] as const))('%s', (_name, recording) => {
    const { rig, settings, rateHz, channels } = recording;
    const made = analyse({ rig, settings, rateHz, channels }, [{ arrays: columns(recording) }]);
    if (!made.ok) throw new Error(made.issue.detail);
    const analysis = made.value;
    const rises = analysis.channels[channels[0]!]!.edges.filter(({ rising }) => rising);
    const extra = analysis.pulses - recording.pulses;
    expect(extra).toBeGreaterThanOrEqual(0);
    expect(extra).toBeLessThanOrEqual(recording.mostExtra);
    expect(rises).toHaveLength(analysis.pulses);
    expect(analysis.turns).toBe(analysis.pulses);

    const mean = (60 * (rises.length - 1)) / (rises.at(-1)!.midT - rises[0]!.midT);
    expect(mean).toBeGreaterThan(recording.meanRpm[0]);
    expect(mean).toBeLessThan(recording.meanRpm[1]);
    const speeds = analysis.speed.flatMap(({ rpm }) => (rpm === null ? [] : [60 / rpm]));
    // The first edge's instant bears the delay at 0 Hz, the first speed already the one at the pulses' frequency.
    expect(60 / (speeds.reduce((sum, period) => sum + period, 0) / speeds.length) / mean).toBeCloseTo(1, 2);

    const truth = JSON.parse(file(recording, 'truth.json')) as Truth;
    const beats = truth.annotated_beat_times_s ?? truth.computed.find_peaks!.times_s;
    expect(beats).toHaveLength(recording.pulses);
    // A band pass whose lower edge lies far above the beat's frequency leads by its phase there; the beats themselves are
    // spikes and do not: what was taken off is put back for this comparison.
    const shiftS = recording.settings.filter === recordings[0]!.settings.filter ? 0 : analysis.delayS;
    for (const beat of beats) {
      expect(rises.filter(({ midT }) => Math.abs(midT + shiftS - beat) < 0.15)).toHaveLength(1);
    }
    expect(analysis.findings.map(({ code }) => code)).toEqual(recording.findings);
  });

  it('loses the beats of the drifting one with a fixed band and no filter', () => {
    const recording = recordings[1]!;
    const settings = { ...recording.settings, filter: { kind: 'none' as const } };
    const volts = columns(recording);
    const sorted = Float64Array.from(volts[0]!).sort();
    const at = (share: number): number => sorted[Math.floor(share * sorted.length)]!;
    const middle = (at(0.001) + at(0.999)) / 2;
    const swing = at(0.999) - at(0.001);
    const band = { mode: 'fixed' as const, operateV: middle + 0.1 * swing, releaseV: middle - 0.1 * swing };
    const made = analyse(
      {
        rig: recording.rig,
        settings: { ...settings, band },
        rateHz: recording.rateHz,
        channels: recording.channels,
      },
      [{ arrays: volts }],
    );
    if (!made.ok) throw new Error(made.issue.detail);
    expect(Math.abs(made.value.pulses - recording.pulses)).toBeGreaterThan(2);
  });
});
