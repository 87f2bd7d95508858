/** Ready-made values for tests of this room. */
import type { CaptureMeta } from '../capture-store/keep';
import type { Databases } from '../open';
import { openDatabases } from '../open';
import type { RigSetup, Settings } from '@/signal/model';

export const setup: RigSetup = {
  sensing: 'single',
  wheel: { pulsesPerTurn: 24, missingPulses: 0, gearRatio: 1, widthClasses: null },
  channels: ['A', 'B'].map((name) => ({
    name,
    role: name === 'A' ? 'A' : 'aux',
    voltsPerCode: 0.001,
    codeOffset: 0,
    minCode: null,
    maxCode: null,
    maxInputV: null,
    sensor: {
      kind: 'linear',
      supplyV: null,
      quiescentV: null,
      sensitivityMvPerMt: null,
      activeLow: false,
      operateMt: null,
      releaseMt: null,
    },
  })),
  expectedDirection: null,
  ratedRpm: null,
};

export const settings: Settings = {
  filter: { kind: 'none' },
  band: { mode: 'fitted', operateFraction: 0.6, releaseFraction: 0.4 },
  holdoffS: 0,
  speed: { method: 'turn', windowS: 0.1, stoppedAfterS: 2 },
};

export const nobody = { id: null, name: 'Test' };

export function inMemory(): Databases {
  return openDatabases({ dataDir: ':memory:', durability: 'normal' });
}

export function captureMeta(over: Partial<CaptureMeta> = {}): CaptureMeta {
  return {
    rigId: 'rig-1',
    title: 'Run-up',
    tags: [],
    note: '',
    stream: 'boot-1',
    startedAtMs: 1_000,
    rateHz: 1000,
    channels: ['A'],
    by: nobody,
    nowMs: 2_000,
    settings: { ...settings, version: 0, createdAt: '2026-01-01T00:00:00.000Z', createdBy: '', reason: '' },
    rig: { id: 'rig-1', name: 'Vent winch', createdAt: '2026-01-01T00:00:00.000Z', ...setup },
    findings: [],
    ...over,
  };
}
