import type { Fact } from '@/client/components/facts';
import { shortNumber } from '@/client/components/finding-words';
import { consequencesOf } from '@/signal/consequences';
import { defaultSettings, type RigSetup, type Settings, type WidthClass } from '@/signal/model';
import { sensorNotes } from '@/signal/sensor-notes';
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
    wheel: { pulsesPerTurn, missingPulses, gearRatio, widthClasses: widthsOf(draft) },
    ratedRpm: rated !== null && rated > 0 ? rated : null,
  };
}

/** The widths as far as they are typed; null for other arrangements, and while none is a number. */
function widthsOf({ sensing, wheel }: Pick<RigDraft, 'sensing' | 'wheel'>): WidthClass[] | null {
  if (sensing !== 'width-coded') return null;
  const typed = wheel.widthClasses.flatMap(({ widthUs, means }) => {
    const us = numberOf(widthUs);
    return us !== null && us > 0 ? [{ widthS: us / 1e6, means }] : [];
  });
  return typed.length > 0 ? typed : null;
}

/** What the sensors' kinds mean for count and polarity. */
export function sensorSentences(channels: RigDraft['channels']): string[] {
  const sensors = channels.map(({ name, role, sensor: { kind, activeLow } }) => ({
    name,
    role,
    sensor: { kind, activeLow },
  }));
  return sensorNotes(sensors).map(({ detail }) => detail);
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
  const { widths } = found;
  if (widths) {
    const few = widths.isRateEnough === false;
    facts.push(
      {
        name: 'Widths can be told from',
        value: `${unit(widths.neededRateHz, '', '')} samples a second`,
        ...(few ? { tone: 'warn' as const } : {}),
      },
      { name: 'Direction is told up to', value: unit(widths.directionUpToRpm, 'rpm', '') },
    );
    if (few)
      return {
        facts,
        warning: 'Too few samples for the narrowest width: speed is taken, but no direction will be said.',
      };
  }
  return { facts, warning: tooFew && found.neededRateHz !== null ? tooFewSamples(found.neededRateHz) : null };
}

function tooFewSamples(neededHz: number): string {
  return `Too few samples for the rated speed: it needs ${shortNumber(Math.ceil(neededHz))} a second on each channel.`;
}

function unit(value: number | null, name: string, otherwise: string): string {
  if (value === null) return otherwise;
  return name ? `${shortNumber(value)} ${name}` : shortNumber(value);
}
