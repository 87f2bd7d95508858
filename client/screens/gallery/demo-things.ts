import type { Capture, Rig, Samples } from '@/server/contract';
import { defaultSettings } from '@/signal/model';
import type { Analysis, Finding } from '@/signal/model';

const made = new Date(Date.UTC(2026, 0, 5, 14, 7)).toISOString();

export function demoRig(change: Partial<Rig> = {}): Rig {
  const sensor = {
    kind: 'linear',
    supplyV: 3.3,
    quiescentV: 1.65,
    sensitivityMvPerMt: 30,
    activeLow: false,
    operateMt: null,
    releaseMt: null,
  } as const;
  const channel = (name: 'A' | 'B') => ({
    name,
    role: name,
    voltsPerCode: 0.000805664,
    codeOffset: 0,
    minCode: 0,
    maxCode: 4095,
    maxInputV: 3.3,
    sensor,
  });
  return {
    id: 'demo',
    name: 'Vent winch',
    sensing: 'quadrature',
    wheel: { pulsesPerTurn: 24, missingPulses: 0, gearRatio: 1, widthClasses: null },
    channels: [channel('A'), channel('B')],
    expectedDirection: null,
    ratedRpm: 3000,
    createdAt: made,
    ...change,
  };
}

export const weakTooth: Finding = {
  code: 'weak-swing',
  channel: 'A',
  from: 3,
  to: null,
  severity: 'warn',
  outcome: 'found',
  at: 6.28,
  evidence: { peakV: 1.7, underOperateV: 0.22, turnsInARow: 312 },
  message: 'One tooth in 24 is not counted',
  remedy: 'Look for a chipped tooth or a magnet that came loose.',
  causedBy: null,
};

export const lostSamples: Finding = {
  code: 'lost-samples',
  channel: null,
  from: 0.2,
  to: null,
  severity: 'fault',
  outcome: 'found',
  at: 16,
  evidence: { lostMs: 2.4, lostSamples: 48 },
  message: 'Samples were lost',
  remedy: 'A longer buffer on the board, or fewer samples a second.',
  causedBy: null,
};

export function demoCapture(change: Partial<Capture> = {}): Capture {
  return {
    id: 'demo',
    rigId: 'demo',
    title: 'Winch slips on reversal',
    tags: ['reversal', 'gap 1.2 mm', 'before the new bracket'],
    note: 'Direction is known two teeth late here. Gap 1.2 mm by feeler gauge, wheel 3, supply 3.30 V, no load.',
    stream: 'demo',
    startedAt: made,
    durationS: 20,
    rateHz: 20000,
    createdAt: made,
    createdBy: 'Ines Arrow',
    settings: {
      ...defaultSettings,
      version: 7,
      createdAt: made,
      createdBy: 'Ines Arrow',
      reason: 'Narrower band after the bracket was changed',
    },
    rig: demoRig(),
    channels: ['A', 'B'],
    findings: [],
    ...change,
  };
}

/** Speed of the made-up run: forward, through zero at 6.4 s, reverse, forward again. */
function rpmAt(t: number): number {
  if (t < 6) return 640;
  if (t < 6.8) return 640 - (t - 6) * 1600;
  if (t < 12) return -640;
  return Math.min(620, -640 + (t - 12) * 900);
}

const stepS = 0.0005;
const angles: number[] = [0];
for (let i = 1; i <= 20 / stepS; i++) angles.push(angles[i - 1]! + (rpmAt(i * stepS) / 60) * 24 * stepS);

function phaseAt(t: number): number {
  const i = Math.min(angles.length - 2, Math.max(0, Math.floor(t / stepS)));
  return angles[i]! + (angles[i + 1]! - angles[i]!) * (t / stepS - i);
}

const voltsAt = (t: number, lane: number) =>
  1.65 + (1.25 * Math.tanh(2.4 * Math.sin(2 * Math.PI * (phaseAt(t) - lane * 0.25)))) / Math.tanh(2.4);

/** Samples of a stretch, as the hub would give them. */
export function demoSamples(channel: string, fromS: number, toS: number, points: number): Samples {
  const stepS = Math.max(1 / 20000, (toS - fromS) / points);
  const lane = channel === 'A' ? 0 : 1;
  const v = Array.from({ length: Math.floor((toS - fromS) / stepS) }, (_, i) => {
    const t = fromS + i * stepS;
    return t > 16 && t < 16.6 ? null : voltsAt(t, lane) + 0.015 * Math.sin(t * 91_000);
  });
  return { channel, rateHz: 20000, fromS, stepS, kind: 'raw', v };
}

export function demoAnalysis(): Analysis {
  const channels: Analysis['channels'] = {};
  ['A', 'B'].forEach((channel, lane) => {
    const edges: Analysis['channels'][string]['edges'] = [];
    let before = voltsAt(0, lane) > 1.65;
    for (let t = stepS; t < 20; t += stepS) {
      const now = voltsAt(t, lane) > (before ? 1.41 : 1.92);
      if (now !== before && !(t > 16 && t < 16.6)) edges.push({ t, midT: t, rising: now });
      before = now;
    }
    channels[channel] = {
      lowV: 0.4,
      highV: 2.9,
      operateV: 1.92,
      releaseV: 1.41,
      band: [{ t: 0, operateV: 1.92, releaseV: 1.41 }],
      edges,
    };
  });
  return {
    channels,
    speed: Array.from({ length: 2000 }, (_, i) => ({
      t: i / 100,
      rpm: i > 1600 && i < 1660 ? null : rpmAt(i / 100),
      errorRpm: 0.4,
    })),
    direction: [
      { from: 0, to: 6.4, value: 'forward' },
      { from: 6.4, to: 12.7, value: 'reverse' },
      { from: 12.7, to: 20, value: 'forward' },
    ],
    turns: 40.25,
    positions: 966,
    pulses: 966,
    gaps: [{ from: 16, to: 16.6, lostSamples: 12000, estimated: false }],
    delayS: 0,
    margin: { channel: 'A', volts: 0.31, sigmas: 20, millitesla: null },
    wheelFace: null,
    statistics: null,
    findings: [
      {
        ...weakTooth,
        message: 'Direction was known two teeth late',
        at: 6.41,
        to: 6.6,
        remedy: 'Narrow the band or look at the weak tooth.',
      },
      { ...lostSamples, to: 16.6 },
    ],
  };
}
