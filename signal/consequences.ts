/**
 * What a rig's setup leads to, for the setup form: computed while typing, from the setup alone.
 *
 * Tooth frequency f = N gear n / 60. A single channel needs a sample in each half of a tooth, a ring of states one in every
 * state: n_max = 60 fs (w_min / w) / (states N gear k), k = 1 samples a state at least, 2 recommended. Three-hall: six states
 * a cycle. Widths: `statistics/width-code.ts`. Sources: counting states is an identity; factor 2 is ours.
 */
import type { RigSetup, Sensing, Settings, Wheel } from '@/signal/model';
import { sensorNotes } from '@/signal/sensor-notes';
import type { SensorNote } from '@/signal/sensor-notes';
import { neededRateHz } from '@/signal/statistics/width-code';
import { turnIssue, widthIssue } from '@/signal/validate-rig';
import { holdoffIssue, rateIssue, speedIssue } from '@/signal/validate-timing';

/** Every number is finite or null: null where it is not known, and where the validators of the setup refuse what it rests on. */
export type Consequences = {
  /** Tooth frequency at the rated speed, Hz; null where no rated speed is given. */
  toothHz: number | null;
  /** At the rated speed; null where rate or rated speed are not known. */
  samplesPerTooth: number | null;
  /** Above it the arrangement cannot be followed at this rate (each state sampled at least once), rpm. */
  highestRpm: number | null;
  /** With each state sampled at least twice, rpm. */
  recommendedRpm: number | null;
  /** Samples a second on each channel that the rated speed takes, each state sampled twice; null where none is given. */
  neededRateHz: number | null;
  /** Slower than this reads stopped, rpm. */
  lowestRpm: number | null;
  /** The fastest edge that is left: one that comes sooner after the one before on its channel is eaten, s; null without hold-off. */
  holdoffS: number | null;
  /** Teeth faster than this lose edges to the hold-off, Hz. */
  holdoffHz: number | null;
  /** The same as a speed, rpm. */
  holdoffRpm: number | null;
  /** Pulses whose width carries the direction; null for other arrangements, and while no usable widths are given. */
  widths: WidthConsequences | null;
  /** What the kind of sensor means for count and polarity. */
  notes: SensorNote[];
};

export type WidthConsequences = {
  /** Samples a second without which no direction is told: four in the narrowest pulse. */
  neededRateHz: number;
  /** Null where no rate is known yet. */
  isRateEnough: boolean | null;
  /** Faster than this pulses fill more than half of their period, and tell no direction, rpm. */
  directionUpToRpm: number;
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
 * The highest speed that an arrangement allows at a sample rate, rpm, with `samplesPerState` samples in its narrowest state.
 * Width-coded with known widths: a pulse and the pause after it; 0 where a pulse can fall between two samples. Null for a
 * wheel or a rate that the validators refuse, and for shares and samples that are none.
 */
export function highestRpmAt(
  sensing: Sensing,
  wheel: Wheel,
  rateHz: number,
  samplesPerState = 1,
  narrowestStateShare = 1,
): number | null {
  if (turnIssue({ sensing, wheel }) || haveBadWidths(sensing, wheel) || rateIssue(rateHz)) return null;
  if (!(samplesPerState > 0) || !isShare(narrowestStateShare, 1)) return null;
  const rpmPerHz = rpmPerToothHz(wheel);
  if (sensing === 'width-coded' && wheel.widthClasses?.length) {
    const widths = wheel.widthClasses.map(({ widthS }) => widthS);
    const longestStateS = samplesPerState / rateHz;
    if (Math.min(...widths) < longestStateS) return 0;
    return finite(rpmPerHz / (Math.max(...widths) + longestStateS));
  }
  return finite((rateHz * narrowestStateShare * rpmPerHz) / (statesPerCycle(sensing) * samplesPerState));
}

/**
 * Never throws, and gives no number for a setup that `validateSetup` refuses: what rests on the part that is wrong is null.
 * A width-coded wheel whose widths are not given yet is taken as a single channel: its speed comes from leading edges.
 * @param rig its channels may be left out, and then nothing is said of sensors. A rated speed of 0 or less counts as none.
 * @param rateHz samples a second, or null where no board has told it yet. @param narrowestStateShare the narrowest state over
 * an even one, 1 where A and B are 90 degrees apart. @param narrowestHalfShare the shorter of a pulse and the pause after it,
 * over their period.
 */
export function consequencesOf(
  rig: Pick<RigSetup, 'sensing' | 'wheel' | 'ratedRpm'> & Partial<Pick<RigSetup, 'channels'>>,
  settings: Pick<Settings, 'holdoffS' | 'speed'>,
  rateHz: number | null,
  narrowestStateShare = 1,
  narrowestHalfShare = 0.5,
): Consequences {
  const { sensing, wheel } = rig;
  const notes = sensorNotes(rig.channels ?? []);
  const badHoldoff = holdoffIssue(settings) !== null || settings.holdoffS === 0;
  const holdoffS = badHoldoff ? null : settings.holdoffS;
  if (turnIssue(rig)) return { ...nothingKnown, holdoffS, notes };
  const rpmPerHz = rpmPerToothHz(wheel);
  const rated = rig.ratedRpm !== null && rig.ratedRpm > 0 ? rig.ratedRpm : null;
  const toothHz = rated === null ? null : finite(rated / rpmPerHz);
  const knownRateHz = rateIssue(rateHz) ? null : rateHz;
  const widths = widthsOf(sensing, wheel, knownRateHz);
  const highest = (samplesPerState: number): number | null =>
    knownRateHz === null
      ? null
      : highestRpmAt(sensing, wheel, knownRateHz, samplesPerState, narrowestStateShare);
  const twice = highest(2);
  // Each edge, of either polarity, opens a hold-off: it must end within the shorter half of a tooth.
  const holdoffHz = holdoffS === null ? null : holdoffLimitHz(rig, holdoffS, narrowestHalfShare);
  return {
    toothHz,
    samplesPerTooth: knownRateHz === null || toothHz === null ? null : finite(knownRateHz / toothHz),
    highestRpm: highest(1),
    recommendedRpm: twice === null || !widths ? twice : Math.min(twice, widths.directionUpToRpm),
    neededRateHz:
      toothHz === null || haveBadWidths(sensing, wheel) || !isShare(narrowestStateShare, 1)
        ? null
        : finite(
            Math.max(
              (2 * statesPerCycle(sensing) * toothHz) / narrowestStateShare,
              widths?.neededRateHz ?? 0,
            ),
          ),
    lowestRpm: lowestRpmOf(sensing, wheel, settings.speed, narrowestStateShare),
    holdoffS,
    holdoffHz,
    holdoffRpm: holdoffHz === null ? null : finite(holdoffHz * rpmPerHz),
    widths,
    notes,
  };
}

const nothingKnown = {
  toothHz: null,
  samplesPerTooth: null,
  highestRpm: null,
  recommendedRpm: null,
  neededRateHz: null,
  lowestRpm: null,
  holdoffHz: null,
  holdoffRpm: null,
  widths: null,
};

/** What is far beyond any rig overflows: then it is not known either. */
function finite(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}

function isShare(share: number, most: number): boolean {
  return share > 0 && share <= most;
}

/** Whether widths are given that cannot be told from each other. */
function haveBadWidths(sensing: Sensing, wheel: Wheel): boolean {
  return Boolean(wheel.widthClasses?.length) && widthIssue({ sensing, wheel }) !== null;
}

/** rpm of the shaft at one position a second. */
function rpmPerToothHz({ pulsesPerTurn, gearRatio }: Wheel): number {
  return 60 / (pulsesPerTurn * gearRatio);
}

function lowestRpmOf(
  sensing: Sensing,
  wheel: Wheel,
  speed: Settings['speed'],
  narrowestStateShare: number,
): number | null {
  if (speedIssue({ speed }) || !isShare(narrowestStateShare, 1)) return null;
  const positions = silentPositions(sensing, wheel, narrowestStateShare);
  return finite((positions * rpmPerToothHz(wheel)) / speed.stoppedAfterS);
}

/** Positions without any edge while the shaft turns: its gap, or the widest state of a ring. */
function silentPositions(sensing: Sensing, wheel: Wheel, narrowestStateShare: number): number {
  if (sensing === 'single' || sensing === 'width-coded') return wheel.missingPulses + 1;
  return (2 - narrowestStateShare) / statesPerCycle(sensing);
}

function holdoffLimitHz(
  { sensing, wheel }: Pick<RigSetup, 'sensing' | 'wheel'>,
  holdoffS: number,
  narrowestHalfShare: number,
): number | null {
  if (haveBadWidths(sensing, wheel) || !isShare(narrowestHalfShare, 0.5)) return null;
  if (sensing !== 'width-coded' || !wheel.widthClasses?.length) return finite(narrowestHalfShare / holdoffS);
  // The end of a pulse is eaten at any speed where the pulse is shorter; else the pause after the widest decides.
  const widths = wheel.widthClasses.map(({ widthS }) => widthS);
  return Math.min(...widths) <= holdoffS ? 0 : finite(1 / (Math.max(...widths) + holdoffS));
}

function widthsOf(sensing: Sensing, wheel: Wheel, rateHz: number | null): WidthConsequences | null {
  if (sensing !== 'width-coded' || !wheel.widthClasses || haveBadWidths(sensing, wheel)) return null;
  const needed = neededRateHz(wheel.widthClasses);
  if (!needed.ok || !Number.isFinite(needed.value)) return null;
  const widestS = Math.max(...wheel.widthClasses.map(({ widthS }) => widthS));
  const directionUpToRpm = finite(rpmPerToothHz(wheel) / (2 * widestS));
  if (directionUpToRpm === null) return null;
  return {
    neededRateHz: needed.value,
    isRateEnough: rateHz === null ? null : rateHz >= needed.value,
    directionUpToRpm,
  };
}
