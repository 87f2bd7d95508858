import type { Filter, Settings, Wheel } from '@/signal/model';
import { countText } from '@/client/drawings/count-text';
import { shortNumber } from '@/client/components/finding-words';

const family = { butterworth: 'Butterworth', bessel: 'Bessel' } as const;
const kinds = { lowpass: 'low pass', highpass: 'high pass', bandpass: 'band pass', notch: 'notch' } as const;

/** "Butterworth low pass, order 4, 800 Hz"; several joined in their order. */
export function filterWords(filter: Settings['filter']): string {
  const all = (Array.isArray(filter) ? filter : [filter]).filter((f) => f.kind !== 'none');
  return all.length === 0 ? 'none' : all.map(oneFilter).join(', then ');
}

function oneFilter(f: Filter): string {
  if (f.kind === 'none') return 'none';
  const at =
    'cutoffHz' in f
      ? `${shortNumber(f.cutoffHz)} Hz`
      : `${shortNumber(f.lowHz)} to ${shortNumber(f.highHz)} Hz`;
  return `${family[f.family]} ${kinds[f.kind]}, order ${f.order}, ${at}`;
}

export function bandWords(band: Settings['band']): string {
  if (band.mode === 'fitted')
    return `fitted, ${percent(band.operateFraction)} and ${percent(band.releaseFraction)} of the swing`;
  return `${shortNumber(band.operateV)} V and ${shortNumber(band.releaseV)} V`;
}

export function wheelWords(wheel: Wheel): string {
  const missing = wheel.missingPulses > 0 ? `, ${wheel.missingPulses} of them missing` : '';
  const gear = wheel.gearRatio === 1 ? '' : `, gear ${shortNumber(wheel.gearRatio)}`;
  return `${countText(wheel.pulsesPerTurn, 'position')} a turn${missing}${gear}`;
}

export function methodWords(speed: Settings['speed']): string {
  return speed.method === 'window' ? `window of ${shortNumber(speed.windowS)} s` : `per ${speed.method}`;
}

const percent = (fraction: number) => `${shortNumber(fraction * 100)} %`;
