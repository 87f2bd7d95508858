import type { LiveFrame } from '@/server/contract';
import type { Finding } from '@/signal/model';

export type DemoOptions = {
  /** Stream time of the frame, s. */
  atS: number;
  rpm?: number;
  teeth?: number;
  channels?: readonly string[];
  /** Index of a tooth that stays under the operate point. */
  weakTooth?: number | null;
  /** Teeth ago that 2.4 ms were lost; null: none. */
  gapTeethAgo?: number | null;
  findings?: readonly Finding[];
  span?: number;
  columns?: number;
};

const operateV = 1.92;
const releaseV = 1.41;

/** A made-up frame for the gallery: a wheel whose turns are true to its speed, so that drawings can be judged. */
export function demoFrame(options: DemoOptions): LiveFrame {
  const {
    atS,
    rpm = 1498.6,
    teeth = 24,
    channels = ['A', 'B'],
    weakTooth = 5,
    gapTeethAgo = null,
    findings = [],
  } = options;
  const { span = 7, columns = 400 } = options;
  const toothHz = (Math.abs(rpm) / 60) * teeth;
  const sense = rpm < 0 ? -1 : 1;
  const toS = Math.floor(atS * toothHz) / toothHz + 0.25 / toothHz;
  const fromS = toS - span / toothHz;
  const stepS = (toS - fromS) / columns;
  const gap =
    gapTeethAgo === null
      ? null
      : { from: toS - gapTeethAgo / toothHz, to: toS - gapTeethAgo / toothHz + 0.0024 };
  const lanes = channels.map((channel, lane) => {
    const v = Array.from({ length: columns + 1 }, (_, i) => {
      const t = fromS + i * stepS;
      if (gap && t >= gap.from && t <= gap.to) return null;
      return volts(t * toothHz * sense - lane * 0.25, weakTooth, teeth, i + lane * 977, lane);
    });
    return {
      channel,
      min: v,
      max: v,
      lowV: 0.4,
      highV: 2.9,
      operateV,
      releaseV,
      clipLowV: 0,
      clipHighV: 3.3,
    };
  });
  const inGap = (t: number) => gap !== null && t >= gap.from && t <= gap.to;
  const edges: NonNullable<LiveFrame['ribbon']>['edges'] = [];
  const rejected: { channel: string; t: number }[] = [];
  for (let k = Math.ceil(fromS * toothHz); k <= toS * toothHz; k++) {
    const tooth = ((k % teeth) + teeth) % teeth;
    const t = (k + 0.2) / toothHz;
    if (t < fromS || t > toS || inGap(t)) continue;
    if (tooth === weakTooth) rejected.push({ channel: channels[0]!, t: t + 0.05 / toothHz });
    else
      edges.push({
        channel: channels[0]!,
        t,
        rising: true,
        direction: channels.length > 1 ? (sense > 0 ? 'forward' : 'reverse') : 'unknown',
      });
  }
  const history = Array.from(
    { length: 240 },
    (_, i) => rpm * (1 + 0.012 * Math.sin(i / 21 + atS / 9) + 0.004 * noise(i + Math.floor(atS))),
  );
  return {
    type: 'frame',
    rigId: 'demo',
    at: new Date(Date.UTC(2026, 0, 5, 13, 52, 7) + atS * 1000).toISOString(),
    dropped: 0,
    live: {
      state: 'running',
      stream: 'demo',
      streamS: atS,
      speedRpm: rpm,
      speedErrorRpm: 0.4,
      speedAtMostRpm: Math.abs(rpm) * 4,
      direction: channels.length > 1 ? (sense > 0 ? 'forward' : 'reverse') : 'unknown',
      turns: 18204,
      turnsSince: new Date(Date.UTC(2026, 0, 5, 13, 40)).toISOString(),
      rates: { declaredHz: 20000, arrivingHz: 20000, toothHz },
      margin: { channel: 'A', volts: -0.22, sigmas: -11, millitesla: null },
      findings: [...findings],
      lookbackS: 600,
      lastBlockAt: new Date(Date.UTC(2026, 0, 5, 13, 52, 7) + atS * 1000).toISOString(),
      sinceLastEdgeS: 0.0004,
      pulses: 436896,
      positions: 436896,
      synced: true,
      settingsVersion: 7,
      phaseDeg: 88.7,
      delayS: 0.00021,
      channels: channels.map((channel) => ({
        channel,
        lowV: 0.4,
        highV: 2.9,
        operateV,
        releaseV,
        noiseV: 0.01,
        duty: 0.49,
        edges: 4,
      })),
      shaft: {
        accelerationRpmPerS: 0.4,
        accelerationErrorRpmPerS: 1.2,
        limits: { resolutionRpm: 0.3, delayS: 0.02, floorRpm: 0.5 },
        pitch: { state: 'in-use', turns: 64, turnsNeeded: 20, uneven: 0.008 },
        sync: null,
        index: null,
        falseSteps: null,
      },
      setupProblem: null,
    },
    ribbon: {
      fromS,
      toS,
      anchor: 'edge',
      signal: 'raw',
      firstS: fromS,
      stepS,
      lanes,
      edges,
      rejected,
      edgeCounts: [],
      gaps: gap ? [{ ...gap, lostSamples: 48, estimated: false }] : [],
    },
    wheelFace: {
      numbered: true,
      angleDeg: (((atS * rpm * 6) % 360) + 360) % 360,
      positions: Array.from({ length: teeth }, (_, i) => ({
        angleDeg: (360 * i) / teeth,
        spacingErrorDeg: 0.08 * Math.sin((2 * Math.PI * i) / teeth) + 0.03 * noise(i),
        swingV: i === weakTooth ? 1.3 : 2.5 + 0.1 * noise(i * 3),
        missing: false,
        count: 100,
      })),
    },
    speedHistory: { agoS: history.map((_, i) => 60 - i / 4), rpm: history },
  };
}

/** A rounded tooth with flat top; the weak one peaks inside the band. */
function volts(phase: number, weakTooth: number | null, teeth: number, seed: number, lane: number): number {
  const tooth = ((Math.floor(phase) % teeth) + teeth) % teeth;
  const wave = Math.tanh(2.4 * Math.sin(2 * Math.PI * (phase - Math.floor(phase) - 0.05))) / Math.tanh(2.4);
  const high = tooth === weakTooth && lane === 0 ? 1.7 : 2.9;
  return 0.4 + ((wave + 1) / 2) * (high - 0.4) + 0.02 * noise(seed);
}

/** The same for the same seed, in -1..1. */
function noise(seed: number): number {
  const x = Math.sin(seed * 12.9898) * 43758.5453;
  return 2 * (x - Math.floor(x)) - 1;
}
