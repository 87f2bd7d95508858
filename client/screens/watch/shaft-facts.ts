/** What stands behind the speed, as names and values; only what is known, and what is not as it should be in its tone. */
import type { Fact } from '@/client/components/facts';
import { shortNumber } from '@/client/components/finding-words';
import type { LiveFrame } from '@/server/contract';

type Shaft = NonNullable<LiveFrame['live']['shaft']>;

const lossWords: Record<NonNullable<NonNullable<Shaft['sync']>['lostBecause']>, string> = {
  'early-gap': 'a gap came early',
  'late-gap': 'the gap did not come',
  'extra-tooth': 'too many pulses',
  timeout: 'silent for too long',
  stopped: 'the shaft stopped',
  reversed: 'the shaft reversed',
  'lost-samples': 'samples were lost',
};

export function shaftFacts({
  accelerationRpmPerS: acceleration,
  accelerationErrorRpmPerS: error,
  limits,
  pitch,
  sync,
  index,
  falseSteps,
}: Shaft): Fact[] {
  const facts: Fact[] = [];
  if (acceleration !== null && error !== null) {
    // Said only as far as it can be told from a steady shaft.
    const value =
      Math.abs(acceleration) > 2 * error
        ? `${rounded(acceleration, error)} ± ${rounded(error, error)} rpm/s`
        : `below ${rounded(2 * error, error)} rpm/s`;
    facts.push({ name: 'acceleration', value });
  }
  if (limits.delayS !== null)
    facts.push({ name: 'speed is behind by', value: `${shortNumber(1000 * limits.delayS)} ms` });
  // Edges of a linear sensor lie between samples: what they resolve stands as the error beside the speed.
  if (limits.resolutionRpm !== null)
    facts.push({
      name: 'one sample is worth',
      value: `${shortNumber(Number(limits.resolutionRpm.toPrecision(2)))} rpm`,
    });
  if (pitch.state === 'in-use')
    facts.push({
      name: 'tooth spacing',
      value:
        pitch.uneven === null
          ? 'learnt'
          : `learnt, ${shortNumber(Number((100 * pitch.uneven).toPrecision(2)))} % rms`,
    });
  else if (pitch.state === 'learning' && pitch.turns > 0)
    facts.push({
      name: 'tooth spacing',
      value:
        pitch.turns < pitch.turnsNeeded
          ? `learning, turn ${pitch.turns} of ${pitch.turnsNeeded}`
          : 'too unsteady to learn',
    });
  if (sync && sync.state !== 'synced')
    facts.push({
      name: 'wheel gap',
      value:
        sync.state === 'proving'
          ? 'one seen'
          : sync.lostBecause === null
            ? 'not seen yet'
            : `lost: ${lossWords[sync.lostBecause]}`,
      ...(sync.lostBecause !== null && sync.lostBecause !== 'stopped' ? { tone: 'warn' as const } : {}),
    });
  if (index) {
    const wrong = index.lostTurns + index.extraTurns;
    facts.push({
      name: 'turns by index',
      value: wrong === 0 ? `${index.exactTurns} exact` : `${wrong} of ${index.exactTurns + wrong} wrong`,
      ...(wrong > 0 ? { tone: 'warn' as const } : {}),
    });
  }
  if (falseSteps && falseSteps.illegal + falseSteps.invalidStates > 0)
    facts.push({
      name: 'steps that cannot be',
      value: String(falseSteps.illegal + falseSteps.invalidStates),
      tone: 'warn',
    });
  return facts;
}

/** To the last figure that its error leaves. */
function rounded(value: number, error: number): string {
  const digits = error > 0 ? Math.min(6, Math.max(0, 1 - Math.floor(Math.log10(error)))) : 3;
  return shortNumber(Number(value.toFixed(digits)));
}
