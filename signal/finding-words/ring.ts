/** What is wrong between channels, and what usually mends it. */
import { tooFast } from '@/signal/finding-words/unseen';
import { short, time, whole } from '@/signal/finding-words/values';
import type { Evidence, FindingWords, Wording } from '@/signal/finding-words/values';

export const ringWords = {
  'dead-channel': (channel, evidence) =>
    evidence.levelV !== undefined
      ? {
          message: `Channel ${channel} stands still at ${short(evidence.levelV)} V, at the end of its range, where a working sensor of this kind does not rest.`,
          remedy:
            'Check supply, ground and signal wire of the sensor, and that the input is the one it is wired to.',
        }
      : evidence.turnsWithoutIndex !== undefined
        ? {
            message: `The index channel ${channel} has not come in ${whole(evidence.turnsWithoutIndex)} turns of the shaft.`,
            remedy:
              'Check the index mark, its distance to the sensor, and the wiring and supply of that sensor.',
          }
        : evidence.humHz !== undefined
          ? {
              message: `Channel ${channel} shows nothing but the mains at ${whole(evidence.humHz)} Hz, while the other channels turn with the shaft.`,
              remedy:
                'Its input floats: look for a broken wire or connector between sensor and board, and for a missing ground.',
            }
          : {
              message: `Channel ${channel} made no edge while channel ${evidence.otherChannel} made ${whole(evidence.otherEdges)}.`,
              remedy:
                'Check the wiring and the supply of this sensor, its distance to the wheel and which pole it faces.',
            },
  'phase-error': (channel, evidence) =>
    evidence.spreadDeg === undefined ? ofPair(evidence) : ofThree(channel, evidence),
  'illegal-state': (_channel, evidence) => ({
    message: `The channels skip a state ${short(evidence.skipsPerTurn)} times a turn${
      evidence.fromState === undefined ? '' : `, most often from ${evidence.fromState} to ${evidence.toState}`
    }, so the count is no longer certain.`,
    remedy:
      'Look first at what else is found on these channels; where there is nothing, raise the sample rate or turn more slowly, and see that no edge falls into the hold-off.',
  }),
  'direction-flip': (_channel, evidence) =>
    evidence.verdict === 'perhaps a servo'
      ? {
          message: `The direction changed ${times(evidence.flips)} at ${short(evidence.speedRpm)} rpm from one tooth to the next: a drive that turns back with ${whole(evidence.neededRadPerS2)} rad/s² or more, or a line that changed.`,
          remedy:
            'Let the shaft turn one way without a reversal: if the direction still changes, look for a loose or swapped line; if not, the drive really turns back so fast.',
        }
      : evidence.expected === undefined
        ? {
            message: `The direction changed ${times(evidence.flips)} at ${short(evidence.speedRpm)} rpm without any slow-down on the way, which no shaft can do.`,
            remedy:
              'Look for a loose or swapped line, for channels that stand too close to each other in phase, and for edges that bounce; turns counted meanwhile are wrong.',
          }
        : evidence.duties === 'mirrored'
          ? {
              message: `The shaft reads ${evidence.turned} where ${evidence.expected} is expected, and one of the two lines is upside down.`,
              remedy: 'Turn the inverted line round in the board, and the direction follows.',
            }
          : {
              message: `The shaft has read ${evidence.turned} for ${whole(evidence.turns)} turns where ${evidence.expected} is expected.`,
              remedy: `Turn the shaft by hand the expected way: if it still reads wrong, ${
                evidence.channels === undefined
                  ? 'exchange what the pulse widths mean'
                  : `swap two of the channels ${evidence.channels} or turn one line round`
              }; if it then reads right, the drive really turned the other way.`,
            },
  'inverted-channel': (channel, evidence) =>
    evidence.turnedOverS !== undefined
      ? {
          message: `Line ${channel} turned upside down while the shaft turned, and since then the shaft reads ${evidence.reads}.`,
          remedy: `Look what changed on line ${channel} at that instant; where it was upside down before and is right now, nothing is left to do.`,
        }
      : channel === null
        ? {
            message: `One of the lines ${evidence.lines} is upside down: what one shows as high for ${whole(evidence.aHighPercent)} % of a tooth, the other shows as high for ${whole(evidence.bHighPercent)} %.`,
            remedy: 'Compare both sensors and their polarity setting, and turn the one that differs round.',
          }
        : evidence.aHighPercent === undefined
          ? {
              message: `Line ${channel} is upside down: the three lines ${evidence.lines} are all high or all low once a cycle, and two of the valid states never come.`,
              remedy: `Turn line ${channel} round and look again; a set that is built with 60 degrees between its sensors looks the same, and is mended the same way at its middle line.`,
            }
          : {
              message: `Line ${channel} is upside down: its active part is the longer one, and the direction reads wrong by it.`,
              remedy: `Turn line ${channel} round in the board, or correct its polarity where it is set.`,
            },
  'near-alias': (channel, evidence) =>
    evidence.apparentHz !== undefined
      ? tooFast(channel, evidence)
      : evidence.samplesPerPulse !== undefined
        ? {
            message: `The narrowest coded pulse of ${time(evidence.narrowestPulseS)} takes ${short(evidence.samplesPerPulse)} samples where 4 are needed, so its width cannot be told and no direction is said.`,
            remedy: `Sample at ${whole(evidence.neededHz)} a second at least, or let the board measure both edges of each pulse with its own timer.`,
          }
        : {
            message:
              evidence.ratedRpm === undefined
                ? `A tooth takes ${short(evidence.samplesPerTooth)} samples and its narrowest state ${short(evidence.samplesOfNarrowestState)}, so edges are missed soon.`
                : `At the rated ${short(evidence.ratedRpm)} rpm a tooth will take ${short(evidence.samplesPerTooth)} samples and its narrowest state ${short(evidence.samplesOfNarrowestState)}.`,
            remedy:
              'Raise the sample rate or take a wheel with fewer teeth; to see whether the speed has already folded down, change the sample rate or turn more slowly: a true speed stays with the shaft, a folded one does not.',
          },
  'standstill-chatter': (channel, evidence) =>
    evidence.stepsHz === undefined
      ? {
          message: `The shaft stands, yet channel ${channel} counts ${short(evidence.teethHz)} teeth a second: a flank stands at the band and the signal goes to and fro across it.`,
          remedy:
            'Widen the band or quieten what shakes the shaft; counts taken meanwhile are too many, and a second channel a quarter of a tooth further on would cancel them.',
        }
      : {
          message: `The shaft stands, yet the channels step to and fro ${short(evidence.stepsHz)} times a second without getting anywhere, mostly channel ${evidence.busiestChannel}.`,
          remedy:
            'Widen the band or quieten what shakes the shaft; the net count is right, only the direction flickers.',
        },
} satisfies Record<string, Wording>;

function ofPair({ errorDeg, narrowestDeg, aHighPercent, bHighPercent }: Evidence): FindingWords {
  const off = Number(errorDeg);
  if (Math.abs(off) < 15)
    return {
      message: `Channels A and B are high for ${whole(aHighPercent)} % and ${whole(bHighPercent)} % of a tooth, so that the narrowest of their four states is ${whole(narrowestDeg)} degrees wide where 90 are right.`,
      remedy:
        'Bring both duty factors near one half: set the band to the middle of the swing, or the air gaps of the two sensors to the same size.',
    };
  return {
    message: `Channel B stands ${whole(90 + off)} degrees of a tooth behind channel A where 90 are right, so that the narrowest of the four states is ${whole(narrowestDeg)} degrees wide.`,
    remedy: `Move the sensor of channel B by ${short(Math.abs(off) / 360)} of the tooth pitch along the rim, so that it switches ${off > 0 ? 'earlier' : 'later'} when turning forward.`,
  };
}

function ofThree(channel: string | null, evidence: Evidence): FindingWords {
  const off = Number(evidence.errorDeg);
  const widths = `the states of the set are ${whole(evidence.narrowestDeg)} to ${whole(evidence.widestDeg)} degrees wide where 60 are right`;
  if (Math.abs(off) < Number(evidence.spreadDeg) / 3)
    return {
      message: `The three lines do not share the cycle evenly: ${widths}, and line ${channel} is high for ${whole(evidence.highPercent)} % of it.`,
      remedy:
        'Latches that switch at opposite fields of one size give even states; check their type and air gap.',
    };
  return {
    message: `Line ${channel} stands ${whole(Math.abs(off))} electrical degrees off its place: ${widths}.`,
    remedy: `Move the sensor of line ${channel} by ${short(Math.abs(off) / 360)} of a pole pair along the rim, so that it switches ${off > 0 ? 'earlier' : 'later'} when turning forward.`,
  };
}

function times(count: number | string | undefined): string {
  return count === 1 ? 'once' : `${whole(count)} times`;
}
