/** All wording of findings, in one place: what is wrong, and what usually mends it. */
import type { FindingCode } from '@/signal/model';

export type FindingWords = { message: string; remedy: string };
type Evidence = Record<string, number | string>;

/** Findings whose rule exists. */
export type WordedCode = Extract<
  FindingCode,
  'lost-samples' | 'clipping' | 'dead-channel' | 'missing-tooth' | 'edge-bounce'
>;

const words: Record<WordedCode, (channel: string | null, evidence: Evidence) => FindingWords> = {
  'lost-samples': (_channel, evidence) => ({
    message: `${whole(evidence.lostSamples)} samples (${short(evidence.lostS)} s) never arrived, so counts and turns are lower bounds from here on.`,
    remedy:
      'Give the board a larger send buffer or a lower sample rate, and look at the link between board and hub.',
  }),
  clipping: (channel, evidence) => ({
    message: `Channel ${channel} stands at the ${evidence.rail} end of its range for ${short(evidence.railPercent)} % of the time, so its peaks are cut off.`,
    remedy: 'Widen the air gap, take a less sensitive sensor, or put an attenuator before the input.',
  }),
  'edge-bounce': (channel, evidence) => ({
    message: `Channel ${channel} counts some teeth more than once: ${short(evidence.shortPercent)} % of its edges follow the one before within a quarter of a tooth, the closest after ${time(evidence.shortestS)}, so the speed reads too high.`,
    remedy:
      'Widen the band or set a hold-off a little longer than the bounce, and look for a loose connector, a weak pull-up or a long unshielded cable.',
  }),
  'dead-channel': (channel, evidence) =>
    evidence.otherEdges === undefined
      ? {
          message: `Channel ${channel} stands still at ${short(evidence.levelV)} V, at the end of its range, where a working sensor of this kind does not rest.`,
          remedy:
            'Check supply, ground and signal wire of the sensor, and that the input is the one it is wired to.',
        }
      : {
          message: `Channel ${channel} made no edge while channel ${evidence.otherChannel} made ${whole(evidence.otherEdges)}.`,
          remedy:
            'Check the wiring and the supply of this sensor, its distance to the wheel and which pole it faces.',
        },
  'missing-tooth': (channel, evidence) => ({
    message: `The tooth at position ${whole(evidence.position)} did not show on channel ${channel} in ${whole(evidence.turnsMissed)} turns running.`,
    remedy: 'Look at that tooth for damage or dirt, narrow the air gap, or lower the operate point.',
  }),
};

export function wordsFor(code: WordedCode, channel: string | null, evidence: Evidence): FindingWords {
  return words[code](channel, evidence);
}

function time(seconds: number | string | undefined): string {
  if (typeof seconds !== 'number') return String(seconds);
  return seconds < 1 ? `${short(1000 * seconds)} ms` : `${short(seconds)} s`;
}

function whole(value: number | string | undefined): string {
  return typeof value === 'number' ? Math.round(value).toString() : String(value);
}

function short(value: number | string | undefined): string {
  return typeof value === 'number' ? Number(value.toPrecision(3)).toString() : String(value);
}
