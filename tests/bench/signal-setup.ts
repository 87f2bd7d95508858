/** The rig and the settings of the comparison, for one channel or for a quadrature pair. */
import type { Channel, RigSetup, Settings } from '@/signal/model';
import { signalCase } from '@/tests/bench/signal-data';

const { cutoffHz, voltsPerCode, operateV, releaseV, teeth } = signalCase;

function channel(name: 'A' | 'B'): Channel {
  return {
    name,
    role: name,
    voltsPerCode,
    codeOffset: 0,
    minCode: -32768,
    maxCode: 32767,
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
  };
}

export function benchRig(channels: 1 | 2): RigSetup {
  return {
    sensing: channels === 1 ? 'single' : 'quadrature',
    wheel: { pulsesPerTurn: teeth, missingPulses: 0, gearRatio: 1, widthClasses: null },
    channels: channels === 1 ? [channel('A')] : [channel('A'), channel('B')],
    expectedDirection: null,
    ratedRpm: null,
  };
}

export const benchSettings: Settings = {
  filter: { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz },
  band: { mode: 'fixed', operateV, releaseV },
  holdoffS: 0,
  speed: { method: 'tooth', windowS: 0.1, stoppedAfterS: 2 },
};
