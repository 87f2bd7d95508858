/** What is wrong with the signal of one channel, and what usually mends it. */
import { short, time, whole } from '@/signal/finding-words/values';
import type { Wording } from '@/signal/finding-words/values';

export const channelWords = {
  clipping: (channel, evidence) => ({
    message: `Channel ${channel} stands at the ${evidence.rail} end of its range for ${short(evidence.railPercent)} % of the time, so its peaks are cut off.`,
    remedy: 'Widen the air gap, take a less sensitive sensor, or put an attenuator before the input.',
  }),
  'offset-drift': (channel, evidence) => ({
    message: `The middle of channel ${channel} has moved by ${short(evidence.movedV)} V since the stream began, to ${short(evidence.middleV)} V; that is ${short(evidence.movedPercentOfSwing)} % of its swing.`,
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
    const size = `${short(evidence.percentOfHalfSwing)} % of half the swing`;
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
    message: `Channels ${evidence.channels} move up and down together by ${short(evidence.amplitudeV)} V at ${short(evidence.rippleHz)} Hz, ${short(evidence.percentOfHalfSwing)} % of half the swing, as sensors do whose supply ripples.`,
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
        message: `Noise of ${short(evidence.noiseV)} V on a flank of ${short(evidence.slopeVPerS)} V/s moves each edge of channel ${channel} by ${time(evidence.scatterS)}, ${short(evidence.scatterPercentOfTooth)} % of a tooth.`,
        remedy: filter,
      };
    }
    const flank = evidence.slow === 'both' ? 'Both flanks' : `The ${evidence.slow} flank`;
    const takes = evidence.slow === 'both' ? 'take' : 'takes';
    return {
      message: `${flank} of channel ${channel} ${takes} ${short(evidence.periodPercent)} % of a period (up in ${time(evidence.riseS)}, down in ${time(evidence.fallS)}).`,
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
