import type { Fact } from '@/client/components/facts';
import { shortNumber } from '@/client/components/finding-words';
import { consequencesOf, statesPerCycle } from '@/signal/consequences';
import { defaultSettings, type RigSetup, type Settings } from '@/signal/model';
import { numberOf, type RigDraft } from '@/client/screens/rig-setup/draft';

export type WheelTyped = Pick<RigSetup, 'sensing' | 'wheel' | 'ratedRpm'>;

/** The wheel as far as it is typed; null while its pulses, gap or gear are no numbers. */
export function wheelOf(draft: Pick<RigDraft, 'sensing' | 'wheel' | 'ratedRpm'>): WheelTyped | null {
  const pulsesPerTurn = numberOf(draft.wheel.pulsesPerTurn);
  const missingPulses = numberOf(draft.wheel.missingPulses) ?? 0;
  const gearRatio = numberOf(draft.wheel.gearRatio) ?? 1;
  const rated = numberOf(draft.ratedRpm);
  const whole = pulsesPerTurn !== null && Number.isInteger(pulsesPerTurn) && Number.isInteger(missingPulses);
  if (!whole || pulsesPerTurn < 1 || missingPulses < 0 || missingPulses >= pulsesPerTurn || !(gearRatio > 0))
    return null;
  return {
    sensing: draft.sensing,
    wheel: { pulsesPerTurn, missingPulses, gearRatio, widthClasses: null },
    ratedRpm: rated !== null && rated > 0 ? rated : null,
  };
}

export type Consequence = { facts: Fact[]; warning: string | null };

/** What a wheel, a rated speed and a sample rate lead to, in words. */
export function consequenceRows(
  wheel: WheelTyped,
  sampleRateHz: number | null,
  settings: Pick<Settings, 'holdoffS' | 'speed'> = defaultSettings,
): Consequence {
  const rateHz = sampleRateHz !== null && sampleRateHz > 0 ? sampleRateHz : null;
  const found = consequencesOf(wheel, settings, rateHz);
  const { stoppedAfterS } = settings.speed;
  const tooFew =
    wheel.ratedRpm !== null && found.recommendedRpm !== null && wheel.ratedRpm > found.recommendedRpm;
  const facts: Fact[] = [
    { name: 'Tooth frequency at rated speed', value: unit(found.toothHz, 'Hz', 'needs the rated speed') },
    {
      name: 'Samples a tooth at rated speed',
      value: unit(
        found.samplesPerTooth,
        '',
        rateHz === null ? 'needs the samples a second' : 'needs the rated speed',
      ),
      ...(tooFew ? { tone: 'warn' as const } : {}),
    },
    {
      name: 'Fastest that is safe to follow',
      value: unit(found.recommendedRpm, 'rpm', 'needs the samples a second'),
    },
    { name: 'Fastest at all', value: unit(found.highestRpm, 'rpm', 'needs the samples a second') },
    {
      name: `Reads stopped below (${shortNumber(stoppedAfterS)} s without an edge)`,
      value: unit(found.lowestRpm, 'rpm', ''),
    },
  ];
  if (found.holdoffRpm !== null) {
    facts.push({ name: 'Hold-off loses edges above', value: unit(found.holdoffRpm, 'rpm', '') });
  }
  return { facts, warning: tooFew ? tooFewSamples(wheel, found.toothHz ?? 0) : null };
}

function tooFewSamples(wheel: WheelTyped, toothHz: number): string {
  const neededHz = 2 * statesPerCycle(wheel.sensing) * toothHz;
  return `Too few samples for the rated speed: it needs ${shortNumber(Math.ceil(neededHz))} a second on each channel.`;
}

function unit(value: number | null, name: string, otherwise: string): string {
  if (value === null) return otherwise;
  return name ? `${shortNumber(value)} ${name}` : shortNumber(value);
}
