/**
 * What a rig's setup leads to, for the setup form: computed while typing, from the setup alone.
 *
 * Tooth frequency f = N gear n / 60. A single channel needs a sample in each half of a tooth, a ring of states one in every
 * state; twice that is recommended. Three-hall: six states a cycle.
 */
import type { RigSetup, Settings, Sensing } from '@/signal/model';

export type Consequences = {
  /** Tooth frequency at the rated speed, Hz; null where no rated speed is given. */
  toothHz: number | null;
  /** At the rated speed; null where rate or rated speed are not known. */
  samplesPerTooth: number | null;
  /** Above it the arrangement cannot be followed at this rate (each state sampled at least once), rpm. */
  highestRpm: number | null;
  /** With each state sampled at least twice, rpm. */
  recommendedRpm: number | null;
  /** Slower than this reads stopped, rpm. */
  lowestRpm: number;
  /** Teeth faster than this lose edges to the hold-off, Hz; null without hold-off. */
  holdoffHz: number | null;
  /** The same as a speed, rpm. */
  holdoffRpm: number | null;
};

/** States a cycle that must each be seen. */
export function statesPerCycle(sensing: Sensing): number {
  switch (sensing) {
    case 'single':
    case 'width-coded':
      return 2;
    case 'quadrature':
      return 4;
    case 'three-hall':
      return 6;
  }
}

/**
 * @param rateHz samples a second, or null where no board has told it yet.
 * @param narrowestStateShare the narrowest state over an even one, 1 where A and B are 90 degrees apart.
 */
export function consequencesOf(
  rig: Pick<RigSetup, 'sensing' | 'wheel' | 'ratedRpm'>,
  settings: Pick<Settings, 'holdoffS' | 'speed'>,
  rateHz: number | null,
  narrowestStateShare = 1,
): Consequences {
  const { pulsesPerTurn, missingPulses, gearRatio } = rig.wheel;
  const rpmPerHz = 60 / (pulsesPerTurn * gearRatio);
  const toothHz = rig.ratedRpm === null ? null : rig.ratedRpm / rpmPerHz;
  const highestRpm =
    rateHz === null ? null : (rateHz * narrowestStateShare * rpmPerHz) / statesPerCycle(rig.sensing);
  const silent = rig.sensing === 'single' ? missingPulses + 1 : 1;
  // Each edge, of either polarity, opens a hold-off: at a duty of one half it must end within half a tooth.
  const holdoffHz = settings.holdoffS > 0 ? 1 / (2 * settings.holdoffS) : null;
  return {
    toothHz,
    samplesPerTooth: rateHz === null || toothHz === null || toothHz === 0 ? null : rateHz / toothHz,
    highestRpm,
    recommendedRpm: highestRpm === null ? null : highestRpm / 2,
    lowestRpm: (silent * rpmPerHz) / settings.speed.stoppedAfterS,
    holdoffHz,
    holdoffRpm: holdoffHz === null ? null : holdoffHz * rpmPerHz,
  };
}
