/** What is wrong with the wheel, and what usually mends it. */
import { short, time, whole } from '@/signal/finding-words/values';
import type { Evidence, Wording } from '@/signal/finding-words/values';

/** A tooth has a number only where a gap gives it one. */
function tooth({ position, positions, numbering }: Evidence): string {
  return numbering === 'relative'
    ? `One tooth in ${whole(positions)}`
    : `Tooth ${whole(position)} of ${whole(positions)} (0 is the first after the gap)`;
}

export const wheelWords = {
  'missing-tooth': (channel, evidence) => ({
    message: `${tooth(evidence)} did not show on channel ${channel} in ${whole(evidence.turnsMissed)} turns.`,
    remedy:
      evidence.numbering === 'fixed since it went missing'
        ? 'Look at both gaps of the wheel: one of them is a tooth that is damaged, weak or dirty, or the number of missing teeth is not set as the wheel is made.'
        : 'Look at that tooth for damage or dirt, narrow the air gap, or lower the operate point; where the wheel is made so, set its missing teeth.',
  }),
  'extra-pulse': (channel, evidence) => ({
    message:
      evidence.where === 'anywhere'
        ? `Channel ${channel} counted ${whole(evidence.pulses)} pulses between teeth in ${time(evidence.windowS)}, at no fixed place of the wheel.`
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
} satisfies Record<string, Wording>;

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
