import type { Fact } from '@/client/components/facts';
import { shortNumber } from '@/client/components/finding-words';
import { consequencesOf } from '@/signal/consequences';
import { defaultSettings, type RigSetup, type Settings, type WidthClass } from '@/signal/model';
import { sensorNotes } from '@/signal/sensor-notes';
import { turnIssue } from '@/signal/validate-rig';
import { numberOf, type RigDraft } from '@/client/screens/rig-setup/draft';

export type WheelTyped = Pick<RigSetup, 'sensing' | 'wheel' | 'ratedRpm'>;

/** The wheel as far as it is typed; null while its pulses, gap or gear are no numbers that a rig can have. */
export function wheelOf(draft: Pick<RigDraft, 'sensing' | 'wheel' | 'ratedRpm'>): WheelTyped | null {
  const pulsesPerTurn = numberOf(draft.wheel.pulsesPerTurn);
  const missingPulses = numberOf(draft.wheel.missingPulses) ?? 0;
  const gearRatio = numberOf(draft.wheel.gearRatio) ?? 1;
  const rated = numberOf(draft.ratedRpm);
  if (pulsesPerTurn === null) return null;
  const { sensing } = draft;
  const wheel = { pulsesPerTurn, missingPulses, gearRatio, widthClasses: widthsOf(draft) };
  if (turnIssue({ sensing, wheel })) return null;
  return { sensing, wheel, ratedRpm: rated !== null && rated > 0 ? rated : null };
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

/** What the sensors' kinds mean for count and polarity; what holds for several channels is said once. */
export function sensorSentences(channels: RigDraft['channels']): string[] {
  const sensors = channels.map(({ name, role, sensor: { kind, activeLow } }) => ({
    name,
    role,
    sensor: { kind, activeLow },
  }));
  const alike = new Map<string, { detail: string; others: string[] }>();
  for (const { code, channel, detail } of sensorNotes(sensors)) {
    const known = alike.get(code);
    if (known) known.others.push(channel);
    else alike.set(code, { detail, others: [] });
  }
  return [...alike.values()].map(({ detail, others }) =>
    others.length === 0 ? detail : `${detail} ${alsoWords(others)}`,
  );
}

/** "The same holds for B and C." */
function alsoWords(names: readonly string[]): string {
  const last = names.at(-1)!;
  const listed = names.length === 1 ? last : `${names.slice(0, -1).join(', ')} and ${last}`;
  return `The same holds for ${listed}.`;
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
  const tooth = wheel.sensing === 'three-hall' ? 'Pole-pair' : 'Tooth';
  // With a rate it can only be the setup itself: widths that are alike, or a rate beyond what is taken.
  const unknown = rateHz === null ? 'needs sample rate' : 'not with this setup';
  const facts: Fact[] = [
    { name: `${tooth} frequency`, value: unit(found.toothHz, 'Hz', 'needs rated speed') },
    {
      name: wheel.sensing === 'three-hall' ? 'Samples a pole pair' : 'Samples a tooth',
      value: unit(found.samplesPerTooth, '', rateHz === null ? 'needs sample rate' : 'needs rated speed'),
      ...(tooFew ? { tone: 'warn' as const } : {}),
    },
    { name: 'Fastest that is safe to follow', value: fastest(found.recommendedRpm, unknown) },
    { name: 'Fastest at all', value: fastest(found.highestRpm, unknown) },
    { name: 'Reads stopped below', value: unit(found.lowestRpm, 'rpm', '') },
    { name: 'that is, no edge for', value: unit(stoppedAfterS, 's', '') },
  ];
  if (found.holdoffRpm !== null) {
    facts.push({ name: 'Hold-off loses edges above', value: unit(found.holdoffRpm, 'rpm', '') });
  }
  const { widths } = found;
  if (widths) {
    const few = widths.isRateEnough === false;
    facts.push(
      {
        name: 'Samples to tell the widths',
        value: `${shortNumber(Math.ceil(widths.neededRateHz))} a second`,
        ...(few ? { tone: 'warn' as const } : {}),
      },
      { name: 'Direction is told up to', value: unit(widths.directionUpToRpm, 'rpm', '') },
    );
    if (few)
      return {
        facts,
        warning:
          found.highestRpm === 0
            ? 'Far too few samples: a whole pulse can fall between two of them, so that not even the speed is right.'
            : 'Too few samples for the narrowest width: speed is taken, but no direction will be said.',
      };
  }
  return { facts, warning: tooFew && found.neededRateHz !== null ? tooFewSamples(found.neededRateHz) : null };
}

function fastest(rpm: number | null, unknown: string): string {
  return rpm === 0 ? 'none' : unit(rpm, 'rpm', unknown);
}

function tooFewSamples(neededHz: number): string {
  return `Too few samples for the rated speed: it needs ${shortNumber(Math.ceil(neededHz))} a second on each channel.`;
}

function unit(value: number | null, name: string, otherwise: string): string {
  if (value === null) return otherwise;
  const short = shortNumber(value < 1000 ? Number(value.toPrecision(3)) : value);
  return name ? `${short} ${name}` : short;
}
