/** What the signal shows and the edges do not: too quick, hidden by noise, behind a filter, or within the hold-off. */
import { short, time } from '@/signal/finding-words/values';
import type { Evidence, FindingWords } from '@/signal/finding-words/values';

export function tooFast(channel: string | null, evidence: Evidence): FindingWords {
  const who = channel === null ? 'The channels swing' : `Channel ${channel} swings`;
  return {
    message: `${who} by ${short(evidence.swingV)} V about every ${short(evidence.samplesPerTooth)} samples, too fast for an edge to be made of it: teeth of so few samples or fewer still, or something else as fast.`,
    remedy: `Raise the sample rate above ${short(evidence.neededHz)} a second, or turn more slowly, and look again: teeth come apart then and are counted; what stays while the shaft stands comes from elsewhere.`,
  };
}

export function hiddenByNoise(channel: string | null, evidence: Evidence): FindingWords {
  const at = evidence.toneHz === undefined ? '' : ` at ${short(evidence.toneHz)} Hz`;
  const filter =
    evidence.helpingCutoffHz === undefined
      ? 'Quieten the noise or narrow the air gap'
      : `Set a low pass at about ${short(evidence.helpingCutoffHz)} Hz`;
  return {
    message: `Channel ${channel} swings by ${short(evidence.swingV)} V${at}, only ${short(evidence.swingSigmas)} times its noise of ${short(evidence.noiseV)} V, so that no tooth can be told from the noise and nobody knows whether the shaft turns.`,
    remedy: `${filter}, and look again: where the shaft turns, its teeth are counted then; where it stands, look what else swings so.`,
  };
}

export function takenByFilter(channel: string | null, evidence: Evidence): FindingWords {
  const at = evidence.toneHz === undefined ? '' : ` at ${short(evidence.toneHz)} Hz`;
  return {
    message: `Channel ${channel} swings by ${short(evidence.rawSwingV)} V${at} before the ${evidence.filter}, which leaves ${short(evidence.leftV)} V of it (${short(evidence.leftPercent)} %)${
      evidence.counted === 'yes' ? ', hardly enough to count by' : ', so that its teeth are not counted'
    }.`,
    remedy:
      evidence.toneHz === undefined
        ? 'Take the filter off and look again: where the shaft turns, its teeth are counted then.'
        : `Let the filter pass ${short(evidence.toneHz)} Hz, or take it off, if that is the shaft; if the shaft stands, look what else swings so.`,
  };
}

export function eatenByHoldoff(channel: string | null, evidence: Evidence): FindingWords {
  const { holdoffS, limitS, limitRpm, speedTimes } = evidence;
  if (evidence.outcome === 'cannot-tell')
    return {
      message: `Channel ${channel} crosses its band every ${time(limitS)} within the hold-off of ${time(holdoffS)}: teeth that it eats, or bounce that lasts as long as it does.`,
      remedy: 'Set the hold-off to 0 and look again: bounce is found as such then, and teeth are counted.',
    };
  return {
    message: `The hold-off of ${time(holdoffS)} is longer than half a tooth, which takes ${time(evidence.toothS)}, so that it eats edges of channel ${channel} and the speed reads about ${short(speedTimes)} times what it is.`,
    remedy: `Set a hold-off well below ${time(limitS)}, or none; as it is, teeth are counted right below ${short(limitRpm)} rpm only.`,
  };
}
