/**
 * Teeth as they pass a sensor, without a signal: instants with noise, of a wheel whose teeth stand off their places, on a
 * shaft of known motion. For tests of what is made of instants. Not part of the product.
 */
import { createEdgeQueue, createSpeedColumns } from '@/signal/columns';
import type { SpeedMethod } from '@/signal/model';
import { defaultSettings } from '@/signal/model';
import { edgeRising } from '@/signal/pipeline-types';
import { normal, seeded, testRig } from '@/signal/test-signals';
import { ToothTrain } from '@/signal/tooth-train';

export type Shaft = { turnsAt(t: number): number; speedAt(t: number): number };

/** Turns a second, gaining `gain` of them every second. */
export function ramp(speed: number, gain: number): Shaft {
  return { turnsAt: (t) => speed * t + (gain * t * t) / 2, speedAt: (t) => speed + gain * t };
}

/** About a mean speed, up and down by a share of it, so many times a second. */
export function swaying(speed: number, share: number, hz: number): Shaft {
  const w = 2 * Math.PI * hz;
  return {
    turnsAt: (t) => speed * (t + (share / w) * (1 - Math.cos(w * t))),
    speedAt: (t) => speed * (1 + share * Math.sin(w * t)),
  };
}

export type WheelSpec = {
  positions: number;
  missing?: number;
  /** Rms of the places of its teeth, positions; one more swing a turn of `runOut` positions either way. */
  pitchRms?: number;
  runOut?: number;
  seed: number;
};

export function offsetsOf({ positions, pitchRms = 0, runOut = 0, seed }: WheelSpec): number[] {
  const random = normal(seeded(seed));
  return Array.from(
    { length: positions },
    (_, k) => pitchRms * random() + runOut * Math.sin((2 * Math.PI * k) / positions),
  );
}

export type Tooth = { place: number; trueS: number; riseS: number; fallS: number; sigmaS: number };

/**
 * The teeth of so many turns from `fromTurn` on, each rise and fall late or early by noise of `noise` positions rms.
 * @param offsets as `offsetsOf` gives them, or others.
 */
export function passTeeth(
  wheel: WheelSpec,
  offsets: readonly number[],
  shaft: Shaft,
  noise: number,
  turns: number,
  fromTurn = 0,
): Tooth[] {
  const { positions, missing = 0, seed } = wheel;
  const random = normal(seeded(seed + 1));
  const teeth: Tooth[] = [];
  let t = 0;
  for (let place = fromTurn * positions; place < (fromTurn + turns) * positions; place++) {
    const k = place % positions;
    if (k >= positions - missing) continue;
    const at = (offset: number): number => {
      const wanted = (place + 0.5 + offset) / positions;
      for (let i = 0; i < 60; i++) {
        const step = (shaft.turnsAt(t) - wanted) / shaft.speedAt(t);
        t -= step;
        if (Math.abs(step) < 1e-13) break;
      }
      return t;
    };
    const trueS = at(offsets[k]!);
    const sigmaS = noise / (positions * shaft.speedAt(trueS));
    const fallS = at(offsets[k]! + 0.5);
    teeth.push({ place, trueS, riseS: trueS + sigmaS * random(), fallS: fallS + sigmaS * random(), sigmaS });
  }
  return teeth;
}

/** A tooth train of a single channel that is fed tooth by tooth. */
export class TrainBench {
  readonly columns = createSpeedColumns();
  readonly train: ToothTrain;
  private readonly queue = createEdgeQueue();

  constructor(method: SpeedMethod, windowS: number, positions: number, missing = 0) {
    const settings = { ...defaultSettings, speed: { method, windowS, stoppedAfterS: 2 } };
    this.train = new ToothTrain(testRig('single', positions, missing), missing, settings, this.columns);
    this.queue.count = 1;
  }

  /** @returns entries of speed that it made: of this tooth, and of one that had to wait for it. */
  take({ riseS, fallS, sigmaS }: Pick<Tooth, 'riseS' | 'fallS' | 'sigmaS'>): number {
    const before = this.columns.count;
    this.edge(riseS, sigmaS, true);
    this.edge(fallS, sigmaS, false);
    return this.columns.count - before;
  }

  private edge(t: number, sigmaS: number, rising: boolean): void {
    const { queue, train } = this;
    queue.at[0] = queue.midS[0] = t;
    queue.delayS[0] = 0;
    queue.sigmaS[0] = sigmaS;
    queue.extremeV[0] = rising ? 0 : 1;
    queue.flags[0] = rising ? edgeRising : 0;
    if (rising) train.rise(queue, 0);
    else train.fall(queue, 0);
  }
}

export type JudgedSpeed = {
  /** Share by which it is off the true mean speed of the same stretch, and what it says of its error, as a share. */
  off: number;
  said: number;
  /** Of the tooth that closes it. */
  place: number;
};

/** Runs teeth through a train and holds each speed against the true mean speed between the first and the last of its teeth. */
export function judgeSpeeds(
  bench: TrainBench,
  teeth: readonly Tooth[],
  shaft: Shaft,
  method: SpeedMethod,
  windowS: number,
  positions: number,
): JudgedSpeed[] {
  const judged: JudgedSpeed[] = [];
  teeth.forEach((tooth, last) => {
    for (let made = bench.take(tooth); made > 0; made--) {
      const i = bench.columns.count - made;
      const end = teeth.slice(0, last + 1).findLastIndex(({ riseS }) => riseS === bench.columns.t[i]);
      let begin = end - 1;
      if (end < 1) throw new Error('a speed of no tooth');
      if (method === 'turn')
        while (begin > 0 && teeth[end]!.place - teeth[begin - 1]!.place <= positions) begin--;
      if (method === 'window')
        while (begin > 0 && teeth[begin - 1]!.riseS >= teeth[end]!.riseS - windowS) begin--;
      const { trueS: fromS } = teeth[begin]!;
      const { trueS: toS, place } = teeth[end]!;
      const truth = (60 * (shaft.turnsAt(toS) - shaft.turnsAt(fromS))) / (toS - fromS);
      judged.push({
        off: bench.columns.rpm[i]! / truth - 1,
        said: bench.columns.errorRpm[i]! / truth,
        place,
      });
    }
  });
  return judged;
}

/** Share of speeds within two of their errors, rms of what they are off by, and the median of what they say. */
export function honestyOf(speeds: readonly JudgedSpeed[]): { within: number; rms: number; said: number } {
  const said = speeds.map((speed) => speed.said).sort((a, b) => a - b);
  return {
    within: speeds.filter((speed) => Math.abs(speed.off) <= 2 * speed.said).length / speeds.length,
    rms: Math.sqrt(speeds.reduce((sum, { off }) => sum + off * off, 0) / speeds.length),
    said: said[said.length >> 1]!,
  };
}
