import { describe, expect, it } from 'vitest';
import { withFault } from '@/simulator/cli-rigs';
import { demoRigs } from '@/simulator/demo-lab';
import { shareOf } from '@/simulator/faults';
import { createRig, type RigSpec } from '@/simulator/rig-model';

const hauler = demoRigs[0]!.spec;
const guide = demoRigs[1]!.spec;
const healthy = { ...hauler, faults: [] };

function swing(codes: ArrayLike<number>): number {
  return Math.max(...Array.from(codes)) - Math.min(...Array.from(codes));
}

describe('faults', () => {
  it('come and go smoothly over their ease', () => {
    const fault = { beginS: 10, endS: 20, easeS: 2 };
    const shares = [9.99, 10, 11, 12, 15, 19, 20].map((t) => Number(shareOf(fault, t).toFixed(12)));
    expect(shares).toEqual([0, 0, 0.5, 1, 1, 0.5, 0]);
  });

  it('a wider gap weakens the swing by exp(-2 pi dz / pitch)', () => {
    const near = createRig(healthy, 1).block(400_000, 4000)[0]!;
    const wide = createRig(
      { ...healthy, faults: [{ kind: 'gap', beginS: 0, endS: 1e9, addMm: 1 }] },
      1,
    ).block(400_000, 4000)[0]!;
    expect(swing(wide) / swing(near)).toBeCloseTo(Math.exp((-2 * Math.PI) / 6.3), 1);
  });

  it('the gap at which the hauler clips drives the converter to its end, and only that', () => {
    const narrow = hauler.faults.filter((fault) => fault.kind === 'gap' && fault.addMm < 0);
    const closed = { ...hauler, faults: narrow.map((fault) => ({ ...fault, beginS: 0, endS: 60 })) };
    const atEnd = (spec: RigSpec) =>
      Array.from(createRig(spec, 1).block(400_000, 4000)[0]!).filter((code) => code === 4095).length;
    expect(narrow).toHaveLength(1);
    expect(atEnd(healthy)).toBe(0);
    expect(atEnd(closed)).toBeGreaterThan(400);
  });

  it('a missing tooth takes exactly one pulse a turn away', () => {
    const count = (codes: ArrayLike<number>) => {
      let edges = 0;
      let high = false;
      for (const code of Array.from(codes)) {
        if (!high && code > 2400) {
          high = true;
          edges += 1;
        } else if (high && code < 1800) high = false;
      }
      return edges;
    };
    // 20 s to 30 s: 420 rpm, 70 turns.
    const all = createRig(healthy, 1).block(20 * 20_000, 200_000)[0]!;
    const less = createRig(withFault(healthy, 'missing-tooth'), 1).block(20 * 20_000, 200_000)[0]!;
    expect(count(all) - count(less)).toBe(70);
  });

  it('a dead channel stands still while the other goes on', () => {
    const [a, b] = createRig(withFault(guide, 'dead-channel:B'), 1).block(200_000, 4000);
    expect(swing(a!)).toBeGreaterThan(8000);
    expect(swing(b!)).toBeLessThan(400);
  });

  it('are read from the command line, or refused with a sentence', () => {
    expect(withFault(healthy, 'hum:A@3-5').faults).toEqual([
      { kind: 'hum', channel: 'A', beginS: 3, endS: 5, amplitudeV: 0.15, hz: 50 },
    ]);
    expect(() => withFault(healthy, 'gremlins')).toThrow('gremlins');
    expect(() => withFault(healthy, 'hum:Q')).toThrow('channel "Q"');
    expect(() => withFault(healthy, 'hum@5-3')).toThrow('ends before');
  });
});
