import { describe, expect, it } from 'vitest';
import type { SampleArray, WheelFace } from '@/signal/model';
import type { Pipeline } from '@/signal/pipeline-types';
import { normal, sampled, seeded, testPipeline, testRig, toothWheel } from '@/signal/test-signals';
import { WheelFaceMeter } from '@/signal/wheel-face-meter';

const rateHz = 10_000;

/** The face after `turns` turns of teeth at `places` (in positions), each `swingOf` strong; passed at `timeAt` turns. */
function faceOf(
  places: readonly number[],
  turns: number,
  timeAt: (turns: number) => number,
  swingOf: (k: number, turn: number) => number = () => 1,
): WheelFaceMeter {
  const n = places.length;
  const face = new WheelFaceMeter(n, 0);
  face.start(false);
  for (let k = 0; k < n * turns; k++) {
    const turn = Math.floor(k / n);
    face.t = timeAt(turn + places[k % n]! / n);
    face.toothSwingV = swingOf(k % n, turn);
    face.place(k % n, 1);
  }
  return face;
}

const bent = [0, 1.06, 2, 3, 3.97, 5, 6, 7];
const meanOff = (0.06 - 0.03) / 8;

describe('the face of the wheel', () => {
  const ramps: [string, (turns: number) => number][] = [
    ['a steady shaft', (turns) => turns / 10],
    ['a shaft that speeds up by 5 % a turn', (turns) => Math.sqrt(1 + 0.1 * turns)],
    ['a shaft that slows down by 6 % a turn', (turns) => -Math.sqrt(4 - 0.11 * turns)],
    ['a shaft that speeds up ever more', (turns) => Math.log(1 + turns / 30)],
  ];
  it.each(ramps)('shows where the teeth stand on %s', (_name, timeAt) => {
    const face = faceOf(bent, 14, timeAt);
    expect(face.spacing.turns).toBeGreaterThanOrEqual(10);
    bent.forEach((place, k) => {
      expect(Math.abs(face.spacing.spacingDeg[k]! - 45 * (place - k - meanOff))).toBeLessThan(0.02);
      const step = place - k - (k > 0 ? bent[k - 1]! - (k - 1) : bent[7]! - 7);
      expect(Math.abs(face.spacing.step[k]! - step)).toBeLessThan(0.0005);
    });
  });

  it('learns nothing from turns of a shaft that changes its speed by more than a tenth in each', () => {
    const face = faceOf(bent, 14, (turns) => Math.expm1(turns / 8));
    expect(face.turns).toBe(13);
    expect(face.spacing.turns).toBe(0);
  });

  it('keeps mean and spread of swing and spacing', () => {
    const random = normal(seeded(3));
    const places = bent.slice();
    let stepVariance = 0;
    let swing = 0;
    let swingVariance = 0;
    const runs = 200;
    for (let run = 0; run < runs; run++) {
      const face = faceOf(
        places,
        30,
        (turns) => turns / 10 + (0.01 / 80) * random(),
        (k) => 2 + k / 10 + 0.05 * random(),
      );
      stepVariance += face.spacing.stepVariance[2]! / runs;
      swing += face.swingV[4]! / runs;
      swingVariance += face.swingVariance[4]! / runs;
    }
    // The spread about a running mean of gain g is (1 - g / 2) of the true one.
    expect(stepVariance / (2 * 0.01 ** 2)).toBeCloseTo(1 - 1 / 16, 1);
    expect(swing).toBeCloseTo(2.4, 2);
    expect(swingVariance / 0.05 ** 2).toBeCloseTo(1 - 1 / 8, 1);
  });

  it('tells its listeners of every whole turn, with the instants of its teeth', () => {
    const face = new WheelFaceMeter(4, 0);
    const turns: { times: number[]; start: number; endS: number }[] = [];
    face.listeners.push({
      turn: (times, start, endS) => turns.push({ times: Array.from(times), start, endS }),
    });
    face.start(false);
    for (const [position, t, spans] of [
      [1, 1, 1],
      [2, 2, 1],
      [0, 4, 2],
      [1, 5, 1],
      [2, 6, 1],
    ] as const) {
      face.t = t;
      face.place(position, spans);
    }
    expect(turns).toEqual([{ times: [4, 1, 2, NaN], start: 1, endS: 5 }]);
    expect(face.absence.inRow[3]).toBe(1);
    expect(face.absence.missedS[3]).toBe(3);
  });
});

function play(pipeline: Pipeline, ...arrays: SampleArray[]): WheelFace {
  for (let at = 0; at < arrays[0]!.length; at += 777) {
    const count = Math.min(777, arrays[0]!.length - at);
    pipeline.process(
      arrays.map((array) => array.subarray(at, at + count)),
      count,
    );
    pipeline.drain();
  }
  return pipeline.status().wheelFace!;
}

describe('the face in the signal path', () => {
  it('shows a tooth that is being missed hollow, and the others as they are', () => {
    const wheel = (t: number) => {
      const place = 10 * t * 24;
      const height = Math.floor(place) % 24 === 7 && t > 1.5 ? 0.1 : 1;
      return 0.65 + height * (1 - Math.cos(2 * Math.PI * place));
    };
    const pipeline = testPipeline(testRig('single', 24), rateHz);
    const before = play(pipeline, sampled(1.5 * rateHz, rateHz, wheel));
    expect(before.positions[7]!.swingV).toBeCloseTo(2, 1);
    const after = play(
      pipeline,
      sampled(rateHz, rateHz, (t) => wheel(t + 1.5)),
    );
    expect(after.positions[7]!.swingV).toBeNull();
    for (const [k, { swingV }] of after.positions.entries()) if (k !== 7) expect(swingV).toBeCloseTo(2, 1);
  });

  it('numbers teeth alike after a stop on a wheel with a gap', () => {
    // Tooth 12 is weak. The shaft turns, stops for three seconds, and turns on.
    const turnsAt = (t: number) => (t < 2 ? 8 * t : t < 5 ? 16.37 : 16.37 + 5 * (t - 5));
    const wheel = (t: number) => {
      const weak = Math.floor(turnsAt(t) * 36) % 36 === 12;
      const volts = toothWheel(36, 1, turnsAt)(t);
      return weak ? 0.65 + 0.8 * (volts - 0.65) : volts;
    };
    const pipeline = testPipeline(testRig('single', 36, 1), rateHz);
    const volts = sampled(7 * rateHz, rateHz, wheel);
    const weakest = ({ positions }: WheelFace) => {
      const known = positions.map(({ swingV }) => swingV ?? Infinity);
      return known.indexOf(Math.min(...known));
    };
    const parts = [2, 4.5, 7].map((endS, i, ends) =>
      play(pipeline, volts.subarray((i === 0 ? 0 : ends[i - 1]!) * rateHz, endS * rateHz)),
    );
    for (const face of parts) {
      expect(face.numbered).toBe(true);
      expect(face.positions.map(({ missing }) => missing).indexOf(true)).toBe(35);
      expect(weakest(face)).toBe(12);
      expect(face.positions[12]!.swingV).toBeCloseTo(1.6, 1);
      expect(face.positions[12]!.count).toBeGreaterThan(10);
    }
    expect(parts[2]!.positions[12]!.count).toBeGreaterThan(parts[0]!.positions[12]!.count + 5);
  });

  it.each([
    [24, 0],
    [24, 2],
  ])('shows the same wheel of %d with %d missing in both directions', (positions, missing) => {
    // In quadrature: tooth 5 strong, tooth 9 weak, tooth 14 late by an eighth of a pitch. Sensor B is a quarter further on.
    const volts = (turns: number) => {
      const place = turns * positions;
      let sum = 0;
      for (let k = Math.floor(place) - 1; k <= Math.floor(place) + 1; k++) {
        const tooth = ((k % positions) + positions) % positions;
        if (tooth >= positions - missing) continue;
        const d = place - k - 0.5 - (tooth === 14 ? 0.125 : 0);
        const strength = tooth === 5 ? 1.1 : tooth === 9 ? 0.9 : 1;
        if (Math.abs(d) < 0.5) sum += strength * (1 + Math.cos(2 * Math.PI * d));
      }
      return 0.65 + sum;
    };
    const faceFor = (sign: 1 | -1): { face: WheelFace; angleDeg: number; reversed: boolean } => {
      const turnsAt = (t: number) => sign * 6 * t + 100.2;
      const a = sampled(4 * rateHz, rateHz, (t) => volts(turnsAt(t)));
      const b = sampled(4 * rateHz, rateHz, (t) => volts(turnsAt(t) - 0.25 / positions));
      const pipeline = testPipeline(testRig('quadrature', positions, missing), rateHz);
      const face = play(pipeline, a, b);
      expect(pipeline.status().direction).toBe(sign > 0 ? 'forward' : 'reverse');
      return { face, angleDeg: face.angleDeg!, reversed: sign < 0 };
    };
    const forward = faceFor(1).face;
    const reverse = faceFor(-1).face;
    const at = ({ positions: list }: WheelFace, pick: (swings: number[]) => number) => {
      const swings = list.map(({ swingV }) => swingV ?? 2);
      return swings.indexOf(pick(swings));
    };
    const strongest = (face: WheelFace) => at(face, (swings) => Math.max(...swings));
    const weakest = (face: WheelFace) => at(face, (swings) => Math.min(...swings));
    for (const face of [forward, reverse]) {
      // Numbers of a plain wheel are relative, but go round the same way.
      expect((weakest(face) - strongest(face) + positions) % positions).toBe(4);
      const late = face.positions.map(({ spacingErrorDeg }) => spacingErrorDeg ?? 0);
      const place = late.indexOf(Math.max(...late));
      expect((place - strongest(face) + positions) % positions).toBe(9);
      expect(late[place]).toBeCloseTo((0.125 * 360) / positions, 0);
    }
    if (missing === 0) return;
    for (const face of [forward, reverse]) {
      expect(face.numbered).toBe(true);
      expect(strongest(face)).toBe(5);
      expect(face.positions.flatMap((p, i) => (p.missing ? [i] : []))).toEqual([22, 23]);
    }
  });
});
