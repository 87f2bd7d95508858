/** What is wrong with the wheel, and what usually mends it. */
import { eatenByHoldoff } from '@/signal/finding-words/unseen';
import { short, time, whole } from '@/signal/finding-words/values';
import type { Evidence, Wording } from '@/signal/finding-words/values';

/** A tooth has a number only where a gap or an index gives it one. */
function tooth({ position, positions, numbering }: Evidence): string {
  if (numbering === 'relative') return `One tooth in ${whole(positions)}`;
  const first = numbering === 'from the index' ? 'index' : 'gap';
  return `Tooth ${whole(position)} of ${whole(positions)} (0 is the first after the ${first})`;
}

export const wheelWords = {
  'missing-tooth': (channel, evidence) => ({
    message: `${tooth(evidence)} did not show on channel ${channel} in ${whole(evidence.turnsMissed)} turns.`,
    remedy:
      evidence.numbering === 'from the gap, since it went missing'
        ? 'Look at both gaps of the wheel: one of them is a tooth that is damaged, weak or dirty, or the number of missing teeth is not set as the wheel is made.'
        : 'Look at that tooth for damage or dirt, narrow the air gap, or lower the operate point; where the wheel is made so, set its missing teeth.',
  }),
  'extra-pulse': (channel, evidence) => ({
    message:
      evidence.where === 'anywhere'
        ? evidence.pulses === 1
          ? `Channel ${channel} counted a pulse between two teeth, where no shaft can make one.`
          : `Channel ${channel} counted ${whole(evidence.pulses)} pulses between teeth in ${time(evidence.windowS)}, at no fixed place of the wheel.`
        : `Channel ${channel} counts a pulse that is no tooth, turn after turn ${place(evidence)}, so the speed reads too high.`,
    remedy:
      evidence.where === 'anywhere'
        ? 'Look for chips on the wheel and for spikes on the cable (ground, shield, a switched load beside it), or set a hold-off a little below half a tooth.'
        : 'Look there for a burr, a scratch, a screw head or a second magnet, raise the operate point above it, or widen the air gap.',
  }),
  'uneven-teeth': (channel, evidence) => {
    if (evidence.outcome === 'cannot-tell') {
      return {
        message: `The teeth come early and late in a steady wave${evidence.order === undefined ? '' : `, ${whole(evidence.order)} times a turn`}, by up to ${short(evidence.stepPercent)} % of a pitch: their places, or a shaft that really sways so.`,
        remedy:
          'Turn the shaft at another speed and load: what stands on the wheel stays the same share of a pitch, what the drive does changes.',
      };
    }
    if (evidence.swingPercent !== undefined) {
      const weaker = Number(evidence.swingPercent) < 0;
      return {
        message: `${tooth(evidence)} shows ${short(evidence.swingV)} V on channel ${channel}, ${short(Math.abs(Number(evidence.swingPercent)))} % ${weaker ? 'less' : 'more'} than the others, turn after turn.`,
        remedy: weaker
          ? 'Look at that tooth or magnet for damage, dirt or a weak field, and keep the band well below its peak.'
          : 'Look at that tooth or magnet: it stands out, or the others have lost strength.',
      };
    }
    if (evidence.flank === 'falling') {
      const off = `${short(Math.abs(Number(evidence.offPercent)))} % of a pitch`;
      return {
        message:
          evidence.pattern === 'every second tooth'
            ? `Every second tooth has its falling edge off its place by ${off}, so short and long teeth alternate on channel ${channel}.`
            : `${tooth(evidence)} has its falling edge ${off} off its place on channel ${channel}${others(evidence)}, turn after turn.`,
        remedy:
          'Look for teeth or poles of unequal width; the speed comes from rising edges, which stand well, and only what counts both edges sees uneven steps.',
      };
    }
    return {
      message:
        evidence.pattern === 'every second tooth'
          ? `Every second tooth stands off its place by ${short(Math.abs(Number(evidence.offPercent)))} % of a pitch, so the speed from tooth to tooth alternates.`
          : `${tooth(evidence)} stands ${short(Math.abs(Number(evidence.offPercent)))} % of a pitch (${short(Math.abs(Number(evidence.offDeg)))}°) off its place${others(evidence)}, turn after turn.`,
      remedy:
        evidence.pattern === 'every second tooth'
          ? 'Look whether the sensor counts both poles of a ring or both flanks of a tooth; else take the speed per turn, which the places of teeth do not touch.'
          : 'Look at that tooth for damage; where it has to stay, take the speed per turn, which the places of teeth do not touch.',
    };
  },
  'run-out': (channel, evidence) =>
    evidence.outcome === 'cannot-tell'
      ? {
          message: `Once a turn the teeth come early and late by up to ${short(evidence.spacingPercent)} % of a pitch from one to the next (${short(evidence.spacingDeg)}° in all): the wheel is off its centre, or the shaft's speed really sways so.`,
          remedy:
            'Put a second sensor opposite the first, where an eccentric wheel shows the opposite, or turn at another speed and load: the wheel stays the same, a sway changes.',
        }
      : {
          message: `Once a turn the swing of channel ${channel} goes up and down by ${short(evidence.swingPercent)} %, so the wheel runs out of true before the sensor${evidence.spacingDeg === undefined ? '' : ` (its teeth come up to ${short(evidence.spacingDeg)}° early and late)`}.`,
          remedy:
            'Centre the wheel on the shaft and look at bore, bearing and bent shaft; until then keep the band well inside the weakest tooth.',
        },
  'wrong-count': (channel, evidence) =>
    evidence.by === 'hold-off'
      ? eatenByHoldoff(channel, evidence)
      : { message: countMessage(channel, evidence), remedy: countRemedy(evidence) },
} satisfies Record<string, Wording>;

function countMessage(channel: string | null, evidence: Evidence): string {
  const { by, setPulses, foundPulses, setMissing, foundMissing, turns } = evidence;
  const reads = `so the speed reads ${short(evidence.speedTimes)} times what it is`;
  switch (by) {
    case 'index':
      return `From index to index ${whole(foundPulses)} pulses come, ${whole(turns)} turns running, where the wheel is set up with ${whole(setPulses)}, ${reads}.`;
    case 'gap':
      return foundPulses === setPulses
        ? `The gap of the wheel lacks ${teeth(foundMissing)}, where ${whole(setMissing)} are set up.`
        : `The gap of the wheel comes every ${whole(foundPulses)} positions and lacks ${teeth(foundMissing)}, where ${whole(setPulses)} with ${whole(setMissing)} missing are set up, ${reads}.`;
    case 'no gap':
      return `No gap came in ${whole(turns)} turns of ${whole(setPulses)} positions, where ${teeth(setMissing)} should be missing.`;
    case 'channels':
      return `Channel ${evidence.channel} makes ${whole(evidence.channelPulses)} pulses for ${whole(evidence.firstChannelPulses)} of channel ${evidence.firstChannel}, though both look at the same wheel.`;
    default:
      return `The teeth on channel ${channel} repeat their ${by} every ${whole(foundPulses)}, where the wheel is set up with ${whole(setPulses)} a turn.`;
  }
}

function teeth(count: number | string | undefined): string {
  return `${whole(count)} ${count === 1 ? 'tooth' : 'teeth'}`;
}

function countRemedy({
  by,
  setPulses,
  foundPulses,
  foundMissing,
  ratio,
  sensorKind,
  outcome,
}: Evidence): string {
  if (outcome === 'cannot-tell')
    return `Count the teeth of the wheel: it has ${whole(foundPulses)} a turn, or ${whole(Number(setPulses) / Number(foundPulses))} parts that are alike.`;
  if (by === 'no gap')
    return 'Set the number of missing teeth to 0, or look whether something fills the gap before the sensor.';
  if (by === 'channels')
    return 'Look whether both sensors are of the same kind (one that answers to both poles counts twice) and stand before the same track.';
  if (foundMissing !== undefined)
    return `Set ${whole(foundPulses)} pulses a turn with ${whole(foundMissing)} missing, if the wheel is made so: positions count with the missing ones.`;
  if (ratio === '2 : 1')
    return sensorKind === 'omnipolar'
      ? 'Set twice the pulses a turn, since an omnipolar sensor answers to both poles, or take a sensor that answers to one.'
      : 'Set twice the pulses a turn if both poles or both flanks are counted on purpose; else look for what doubles them.';
  if (ratio === '1 : 2')
    return 'Set half the pulses a turn: pole pairs count, not poles, and one flank of a tooth.';
  return `Set ${whole(foundPulses)} pulses a turn if the wheel has so many; else look at the gear between wheel and shaft, or at pole pairs taken for poles.`;
}

function others({ teeth }: Evidence): string {
  const more = Number(teeth) - 1;
  return more > 0 ? `, and ${more} ${more === 1 ? 'other does' : 'others do'} likewise` : '';
}

function place({ where, places, afterPosition, pitchPercent, positions, numbering }: Evidence): string {
  if (where === 'several places') return `at ${whole(places)} places of the wheel`;
  const share = `${short(Number(Number(pitchPercent).toFixed(0)))} % of the way to the next`;
  return numbering === 'relative'
    ? `behind one and the same tooth of ${whole(positions)} (${share})`
    : `behind tooth ${whole(afterPosition)} (${share})`;
}
