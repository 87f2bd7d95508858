import { describe, expect, it } from 'vitest';
import { bandWords, filterWords, methodWords, wheelWords } from '@/client/screens/replay/settings-words';

describe('settings in words', () => {
  it('names filters in their order', () => {
    expect(filterWords({ kind: 'none' })).toBe('none');
    expect(
      filterWords([
        { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 800 },
        { kind: 'notch', family: 'butterworth', order: 2, lowHz: 45, highHz: 55 },
      ]),
    ).toBe('Butterworth low pass, order 4, 800 Hz, then Butterworth notch, order 2, 45 to 55 Hz');
  });
  it('names band, wheel and method', () => {
    expect(bandWords({ mode: 'fixed', operateV: 1.9, releaseV: 1.4 })).toBe('1.9 V and 1.4 V');
    expect(bandWords({ mode: 'fitted', operateFraction: 0.6, releaseFraction: 0.4 })).toBe(
      'fitted, 60 % and 40 % of the swing',
    );
    expect(wheelWords({ pulsesPerTurn: 60, missingPulses: 2, gearRatio: 1, widthClasses: null })).toBe(
      '60 positions a turn, 2 of them missing',
    );
    expect(methodWords({ method: 'window', windowS: 0.1, stoppedAfterS: 2 })).toBe('window of 0.1 s');
  });
});
