/** What is wrong with the signal of one channel, and what usually mends it. */
import { hiddenByNoise, takenByFilter } from '@/signal/finding-words/unseen';
import { short, time, whole } from '@/signal/finding-words/values';
import type { Evidence, Wording } from '@/signal/finding-words/values';

export const channelWords = {
  'weak-swing': (channel, evidence) => {
    if (evidence.against === 'hidden') return hiddenByNoise(channel, evidence);
    if (evidence.against === 'filter') return takenByFilter(channel, evidence);
    return {
      message: `${swingMessage(channel, evidence)}.`,
      remedy:
        evidence.filterPercent === undefined
          ? swingRemedy(evidence)
          : `Raise the cutoff of the filter, which leaves ${short(evidence.filterPercent)} % of the teeth at this speed.`,
    };
  },
  clipping: (channel, evidence) => ({
    message: `Channel ${channel} stands at the ${evidence.rail} end of its range (${short(evidence.railV)} V) for ${short(evidence.railPercent)} % of the time, so that it is cut off there.`,
    remedy:
      evidence.cutBy === 'sensor'
        ? 'Widen the air gap or take a less sensitive sensor: its own output can go no further.'
        : 'Widen the air gap, take a less sensitive sensor, or put an attenuator before the input.',
  }),
  'offset-drift': (channel, evidence) => ({
    message: `The middle of channel ${channel} has moved by ${short(evidence.movedV)} V since the stream began, to ${short(evidence.middleV)} V; that is ${short(evidence.ofSwingPercent)} % of its swing.`,
    remedy:
      'Let the fitted band follow it or take it away with a high pass, and look for heat, a slipped magnet or bracket, and a supply that the converter does not share.',
  }),
  'duty-shift': (channel, evidence) =>
    evidence.usualDuty === undefined
      ? {
          message: `Channel ${channel} is high for ${percent(evidence.duty)} of each period, where a latch before equal poles is high for about half of it.`,
          remedy:
            'Check that the sensor is a latch, that it faces poles of both kinds, and that nothing magnetic stands beside it.',
        }
      : {
          message: `Channel ${channel} is high for ${percent(evidence.duty)} of each period instead of the ${percent(evidence.usualDuty)} that were usual at this speed.`,
          remedy:
            'Look for a gap that has changed, a magnet or iron that came near the sensor, and a threshold that drifts with heat.',
        },
  'mains-hum': (channel, evidence) => {
    const { harmonic, mainsHz } = evidence;
    const times = harmonic === 1 ? '' : ` (${whole(harmonic)} times ${whole(mainsHz)} Hz)`;
    const tone = `a tone of ${short(evidence.humHz)} Hz${times} and ${short(evidence.amplitudeV)} V`;
    const size = `${short(evidence.ofHalfSwingPercent)} % of half the swing`;
    if (evidence.order !== undefined) {
      return {
        message: `Channel ${channel} carries ${tone} (${size}), which may be mains hum or, as the wheel turns ${short(evidence.turnHz)} times a second, its order ${whole(evidence.order)}.`,
        remedy: 'Change the speed by a tenth and look again: hum stays where it is, an order moves along.',
      };
    }
    if (evidence.edgesHz !== undefined) {
      return {
        message: `Channel ${channel} makes ${short(evidence.edgesHz)} edges a second from a swing less than half of what its teeth had, which may be mains hum on a shaft that stands still.`,
        remedy: 'Turn the shaft or change its speed by a tenth and look again: hum keeps its frequency.',
      };
    }
    return {
      message: `Channel ${channel} carries mains hum: ${tone}, ${size}.`,
      remedy:
        'Use a twisted or shielded pair with its ground at one point, a stronger pull-up, or a notch filter, and keep the cable away from mains and motors.',
    };
  },
  'supply-ripple': (_channel, evidence) => ({
    message: `Channels ${evidence.channels} move up and down together by ${short(evidence.amplitudeV)} V at ${short(evidence.rippleHz)} Hz, ${short(evidence.ofHalfSwingPercent)} % of half the swing, as sensors do whose supply ripples.`,
    remedy:
      'Take the reference of the converter from the supply of the sensors, or put a capacitor or a regulator of their own before them.',
  }),
  'slow-edge': (channel, evidence) => {
    if (evidence.slow === 'noise') {
      const filter =
        evidence.helpingCutoffHz === undefined
          ? 'Narrow the air gap or take a stronger magnet, so that the flank gets steeper.'
          : `Set a low pass at about ${short(evidence.helpingCutoffHz)} Hz, which leaves ${time(evidence.scatterThenS)} of it, or narrow the air gap.`;
      return {
        message: `Noise of ${short(evidence.noiseV)} V on a flank of ${short(evidence.slopeVoltsPerSecond)} V/s moves each edge of channel ${channel} by ${time(evidence.scatterS)}, ${short(evidence.ofToothPercent)} % of a tooth.`,
        remedy: filter,
      };
    }
    const flank = evidence.slow === 'both' ? 'Both flanks' : `The ${evidence.slow} flank`;
    const takes = evidence.slow === 'both' ? 'take' : 'takes';
    return {
      message: `${flank} of channel ${channel} ${takes} ${short(evidence.ofPeriodPercent)} % of a period (up in ${time(evidence.riseS)}, down in ${time(evidence.fallS)}).`,
      remedy:
        evidence.slow === 'falling'
          ? 'Check what pulls the line down, and shorten the cable or its capacitance.'
          : 'Fit a stronger pull-up (1 to 10 kilohm to the logic supply), and shorten the cable or its capacitance.',
    };
  },
} satisfies Record<string, Wording>;

/** "43.6 %" of a share. */
function percent(share: number | string | undefined): string {
  return typeof share === 'number' ? `${short(100 * share)} %` : String(share);
}

function swingMessage(channel: string | null, evidence: Evidence): string {
  const { against, marginV, swingV } = evidence;
  switch (against) {
    case 'missed':
      return `About ${short(evidence.emptyPerTurn)} teeth a turn of channel ${channel} do not reach the band of ${short(evidence.releaseV)} to ${short(evidence.operateV)} V, so they are not counted`;
    case 'short':
      return `Channel ${channel} goes up and down between ${short(evidence.lowV)} and ${short(evidence.highV)} V and never crosses its band of ${short(evidence.releaseV)} to ${short(evidence.operateV)} V, so nothing is counted`;
    case 'band': {
      const sigmas =
        evidence.marginSigmas === undefined ? '' : ` (${short(evidence.marginSigmas)} times the noise)`;
      return `The worst tooth of channel ${channel} stands only ${short(marginV)} V${sigmas} beyond the band`;
    }
    case 'noise':
      return `The swing of channel ${channel}, ${short(swingV)} V, is only ${short(evidence.swingSigmas)} times its noise, too little for a band that keeps the noise out`;
    case 'range':
      return `The swing of channel ${channel} is ${short(swingV)} V, ${short(evidence.ofSupplyPercent)} % of the sensor's supply`;
    case 'pull-up':
      return `Channel ${channel} reaches only ${short(evidence.highV)} V where its line should be pulled up to ${short(evidence.expectedHighV)} V`;
    default:
      return `The swing of channel ${channel} has fallen to ${short(swingV)} V, ${short(evidence.leftPercent)} % of what was usual at this speed`;
  }
}

function swingRemedy({ against }: Evidence): string {
  if (against === 'pull-up')
    return 'Fit a pull-up of 1 to 10 kilohm to the logic supply, and look for what loads the line.';
  if (against === 'short')
    return 'Narrow the air gap or move the band into the signal; where the shaft only rocks, turn it and look again.';
  const gap = 'Narrow the air gap or take a stronger magnet';
  return against === 'before'
    ? `${gap}, and look for a bracket that gave way, heat and dirt.`
    : `${gap}, or fit the band to the signal and quieten the noise.`;
}
