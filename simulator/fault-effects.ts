/** What the faults that are on do to the rig and to each of its channels now. */
import { shareOf, type Fault } from '@/simulator/faults';
import type { Burr } from '@/simulator/burr';

export type RigEffects = {
  gapAddMm: number;
  runOutAddMm: number;
  rippleV: number;
  rippleHz: number;
  /** Factor on the wheel's field. */
  magnet: number;
  shakePositions: number;
  shakeHz: number;
  burrs: Burr[];
  swapped: [string, string] | null;
};
export type ChannelEffects = {
  offsetV: number;
  lowV: number;
  highV: number;
  humV: number;
  humHz: number;
  humThird: number;
  noiseV: number;
  deadV: number | null;
  bounceS: number;
  ringHz: number;
  ringDecayS: number;
  ringShare: number;
  /** NaN: as built. */
  pullUpOhm: number;
  pulledToV: number;
  pointsMt: number;
  phaseDeg: number;
  inverted: boolean;
  spikesPerS: number;
  spikeV: number;
  spikeS: number;
  freezesPerS: number;
  freezeS: number;
  /** Freezes of all channels come at the same instants. */
  freezeAll: boolean;
};

export function noRigEffects(): RigEffects {
  return {
    gapAddMm: 0,
    runOutAddMm: 0,
    rippleV: 0,
    rippleHz: 0,
    magnet: 1,
    shakePositions: 0,
    shakeHz: 0,
    burrs: [],
    swapped: null,
  };
}
export function noChannelEffects(): ChannelEffects {
  return {
    offsetV: 0,
    lowV: -Infinity,
    highV: Infinity,
    humV: 0,
    humHz: 0,
    humThird: 0,
    noiseV: 0,
    deadV: null,
    bounceS: 0,
    ringHz: 0,
    ringDecayS: 0,
    ringShare: 0,
    pullUpOhm: NaN,
    pulledToV: NaN,
    pointsMt: 0,
    phaseDeg: 0,
    inverted: false,
    spikesPerS: 0,
    spikeV: 0,
    spikeS: 0,
    freezesPerS: 0,
    freezeS: 0,
    freezeAll: false,
  };
}

/** The wheel's teeth as faults change them. */
export type Teeth = { strengths: Float64Array; places: Float64Array };

/** Adds one fault at time `tS` to the effects and to the wheel's teeth. */
export function applyFault(
  fault: Fault,
  tS: number,
  rig: RigEffects,
  channels: ReadonlyMap<string, ChannelEffects>,
  teeth: Teeth,
): void {
  const share = shareOf(fault, tS);
  if (share === 0) return;
  switch (fault.kind) {
    case 'weak-tooth': {
      const { strengths } = teeth;
      strengths[fault.position] = (strengths[fault.position] ?? 0) * (1 - share * (1 - fault.strength));
      return;
    }
    case 'missing-tooth':
      teeth.strengths[fault.position] = 0;
      return;
    case 'uneven-pitch':
      for (const [position, shift] of Object.entries(fault.shifts))
        teeth.places[Number(position)]! += share * shift;
      return;
    case 'burr':
      rig.burrs.push({ at: fault.at, share: 1, strength: share * fault.strength, width: fault.width });
      return;
    case 'chips':
      rig.burrs.push({ at: null, share: fault.share, strength: fault.strength, width: fault.width });
      return;
    case 'run-out':
      rig.runOutAddMm += share * fault.addMm;
      return;
    case 'gap':
      rig.gapAddMm += share * fault.addMm;
      return;
    case 'weak-magnet':
      rig.magnet *= 1 - share * (1 - fault.factor);
      return;
    case 'shake':
      rig.shakePositions = (share * fault.amplitudeDeg) / 360;
      rig.shakeHz = fault.hz;
      return;
    case 'supply-ripple':
      rig.rippleV = fault.amplitudeV;
      rig.rippleHz = fault.hz;
      return;
    case 'swapped-channels':
      rig.swapped = fault.channels;
      return;
    case 'lost-blocks':
    case 'restart':
      return;
    default:
      for (const [name, effects] of channels) {
        if (fault.channel === undefined || fault.channel === name) applyToChannel(fault, share, effects);
      }
  }
}

type ChannelFault = Extract<Fault, { channel?: string }>;

function applyToChannel(fault: ChannelFault, share: number, effects: ChannelEffects): void {
  switch (fault.kind) {
    case 'offset-drift':
      effects.offsetV += share * fault.offsetV;
      return;
    case 'clipping':
      effects.lowV = fault.lowV ?? -Infinity;
      effects.highV = fault.highV ?? Infinity;
      return;
    case 'hum':
      effects.humV = fault.amplitudeV;
      effects.humHz = fault.hz;
      effects.humThird = fault.thirdShare ?? 0;
      return;
    case 'noise':
      effects.noiseV = fault.rmsV;
      return;
    case 'dead-channel':
      effects.deadV = fault.levelV;
      return;
    case 'bounce':
      effects.bounceS = fault.bounceS;
      return;
    case 'ringing':
      effects.ringHz = fault.hz;
      effects.ringDecayS = fault.decayS;
      effects.ringShare = fault.share;
      return;
    case 'weak-pull-up':
      effects.pullUpOhm = fault.ohm;
      effects.pulledToV = fault.highV ?? NaN;
      return;
    case 'points-drift':
      effects.pointsMt += share * fault.addMt;
      return;
    case 'phase':
      effects.phaseDeg += share * fault.degrees;
      return;
    case 'inverted-line':
      effects.inverted = true;
      return;
    case 'spikes':
      effects.spikesPerS = fault.perS;
      effects.spikeV = fault.heightV;
      effects.spikeS = fault.widthS;
      return;
    case 'freeze':
      effects.freezesPerS = fault.perS;
      effects.freezeS = fault.forS;
      effects.freezeAll = fault.channel === undefined;
      return;
    default:
      fault satisfies never;
  }
}
