import type { LiveFrame } from '@/server/contract';

/** A frame of a rig that turns steadily. */
export function liveFrame(rigId: string, more: Partial<LiveFrame> = {}): LiveFrame {
  return {
    type: 'frame',
    rigId,
    at: '2026-03-01T10:00:00.000Z',
    live: {
      state: 'running',
      stream: 'boot-1',
      streamS: 12,
      speedRpm: 1500,
      speedErrorRpm: 0.4,
      speedAtMostRpm: 1600,
      direction: 'forward',
      turns: 300,
      turnsSince: '2026-03-01T09:59:48.000Z',
      rates: { declaredHz: 20000, arrivingHz: 20000, toothHz: 600 },
      margin: null,
      findings: [],
      lookbackS: 12,
      lastBlockAt: '2026-03-01T09:59:59.980Z',
      sinceLastEdgeS: 0.001,
      pulses: 7200,
      positions: 7200,
      synced: true,
      settingsVersion: 0,
      phaseDeg: null,
      delayS: 0,
      channels: [],
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
    ribbon: null,
    dropped: 0,
    ...more,
  };
}
