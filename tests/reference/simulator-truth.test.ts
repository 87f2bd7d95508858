/** The signal path against rigs whose true angle is known in closed form, and which share no code with it. */
import { describe, expect, it } from 'vitest';
import type { RigSetup, Settings } from '@/signal/model';
import { createPipeline } from '@/signal/pipeline';
import { edgeRising } from '@/signal/pipeline-types';
import { demoRigs, type DemoRig } from '@/simulator/demo-lab';
import { createRig, type Rig, type RigSpec } from '@/simulator/rig-model';

type Run = {
  rig: Rig;
  /** Stream times of the rising edges of each channel. */
  rising: number[][];
  speed: { t: number; rpm: number }[];
  directions: { t: number; value: string }[];
  turns: number;
  findings: string[];
};

const blockSamples = 997;

function run(demo: DemoRig, spec: RigSpec, fromS: number, seconds: number): Run {
  const rig = createRig(spec, 1);
  const setup = { ...demo.rig, wheel: { ...demo.rig.wheel, widthClasses: null } } as RigSetup;
  const settings = demo.settings as Settings;
  const built = createPipeline({
    rig: setup,
    settings,
    rateHz: spec.rateHz,
    channels: rig.channels,
    startIndex: 0,
  });
  if (!built.ok) throw new Error(built.issue.detail);
  const pipeline = built.value;
  const out: Run = {
    rig,
    rising: rig.channels.map(() => []),
    speed: [],
    directions: [],
    turns: 0,
    findings: [],
  };
  const first = Math.round(fromS * spec.rateHz);
  const count = Math.round(seconds * spec.rateHz);
  for (let at = 0; at < count; at += blockSamples) {
    const length = Math.min(blockSamples, count - at);
    pipeline.process(rig.block(first + at, length), length);
    pipeline.output.edges.forEach((edges, c) => {
      for (let i = 0; i < edges.count; i += 1) {
        if ((edges.flags[i] as number) & edgeRising) out.rising[c]?.push(edges.midT[i] as number);
      }
    });
    const { speed } = pipeline.output;
    for (let i = 0; i < speed.count; i += 1)
      out.speed.push({ t: speed.t[i] as number, rpm: speed.rpm[i] as number });
    out.directions.push(...pipeline.output.directions);
    out.findings.push(...pipeline.output.closedFindings.map((finding) => finding.code));
    pipeline.drain();
  }
  const status = pipeline.status();
  out.turns = status.turns;
  out.findings.push(...status.findings.map((finding) => finding.code));
  return out;
}

const healthy = (demo: DemoRig): RigSpec => ({ ...demo.spec, faults: [], clockPpm: 0 });
const [hauler, guide, pump] = demoRigs as [DemoRig, DemoRig, DemoRig];

describe('signal path against the truth', () => {
  it('line hauler: every tooth once, at its instant, over a wheel with two missing', () => {
    const found = run(hauler, healthy(hauler), 10, 12);
    const truth = found.rig.truth.toothTimes(10, 22).filter((pass) => pass.rising);
    const measured = found.rising[0] as number[];
    const known = truth.map((pass) => pass.tS - 10);
    // The band has to find itself first; from then on, one for one.
    const from = 0.5;
    const late = measured.filter((t) => t > from && t < 11.99);
    const expected = known.filter((t) => t > from && t < 11.99);
    expect(Math.abs(late.length - expected.length)).toBeLessThanOrEqual(1);
    // Run-out and unequal teeth move the middle of the band by a few per cent of the swing, 2 % of a tooth's 2.4 ms.
    const errors = late.map((t) => Math.min(...expected.map((e) => Math.abs(e - t))));
    expect(Math.max(...errors)).toBeLessThan(0.02 * 2.4e-3);
    expect(Math.abs(found.turns - (found.rig.truth.turnsAt(22) - found.rig.truth.turnsAt(10)))).toBeLessThan(
      1.1,
    );
  });

  it('line hauler: the speed of each turn within 0.2 %', () => {
    const found = run(hauler, healthy(hauler), 40, 12);
    const settled = found.speed.filter(({ t, rpm }) => t > 1 && !Number.isNaN(rpm));
    expect(settled.length).toBeGreaterThan(50);
    for (const { t, rpm } of settled) {
      // The mean over the turn that ends at t, from the exact angle.
      const turnS = 60 / Math.abs(rpm);
      const { truth } = found.rig;
      const mean = (60 * (truth.turnsAt(40 + t) - truth.turnsAt(40 + t - turnS))) / turnS;
      expect(Math.abs(Math.abs(rpm) / mean - 1)).toBeLessThan(0.002);
    }
  });

  it('spool guide: turns to and fro come out at nothing, with the direction right', () => {
    const found = run(guide, healthy(guide), 0, 54);
    const { truth } = found.rig;
    expect(Math.abs(found.turns - truth.turnsAt(54))).toBeLessThan(0.1);
    const values = found.directions
      .map(({ value }) => value)
      .filter((value) => value === 'forward' || value === 'reverse');
    const changes = values.filter((value, i) => value !== values[i - 1]);
    expect(changes).toEqual(['forward', 'reverse']);
    const signs = found.speed.filter(
      ({ t, rpm }) => rpm !== 0 && !Number.isNaN(rpm) && Math.abs(truth.speedRpmAt(t)) > 20,
    );
    for (const { t, rpm } of signs) expect(Math.sign(rpm)).toBe(Math.sign(truth.speedRpmAt(t)));
  });

  it('rinse pump: one pulse a pole pair from a latch on an open drain', () => {
    const found = run(pump, healthy(pump), 6, 10);
    const turns = found.rig.truth.turnsAt(16) - found.rig.truth.turnsAt(6);
    expect(Math.abs((found.rising[0] as number[]).length - turns * 4)).toBeLessThanOrEqual(1);
  });

  it('finds nothing wrong with healthy rigs', () => {
    for (const demo of demoRigs) {
      const found = run(demo, healthy(demo), 8, 12);
      expect({ rig: demo.name, findings: found.findings }).toEqual({ rig: demo.name, findings: [] });
    }
  });

  it('finds what is wrong: a missing tooth, clipping, a dead channel', () => {
    const during = (spec: RigSpec, fault: RigSpec['faults'][number]): RigSpec => ({
      ...spec,
      faults: [fault],
    });
    const tooth = { kind: 'missing-tooth', beginS: 14, endS: 60, position: 20 } as const;
    const narrow = { kind: 'gap', beginS: 14, endS: 60, addMm: -0.95 } as const;
    const dead = { kind: 'dead-channel', beginS: 14, endS: 60, channel: 'B', levelV: 0.4 } as const;
    expect(run(hauler, during(healthy(hauler), tooth), 8, 14).findings).toContain('missing-tooth');
    expect(run(hauler, during(healthy(hauler), narrow), 8, 14).findings).toContain('clipping');
    expect(run(guide, during(healthy(guide), dead), 8, 14).findings).toContain('dead-channel');
  });
});
