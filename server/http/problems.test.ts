import { describe, expect, it } from 'vitest';
import { rigInput, settingsInput } from '@/server/contract';
import { fieldErrors, pointerOf } from './problems';

const errorsOf = (schema: typeof settingsInput | typeof rigInput, value: unknown) => {
  const result = schema.safeParse(value);
  return result.success ? [] : fieldErrors(result.error);
};
const settings = (body: object) => errorsOf(settingsInput, { reason: 'test', ...body });

describe('field errors', () => {
  it('point into the choice that was meant', () => {
    const filter = { kind: 'lowpass', family: 'butterworth', order: 3, cutoffHz: 100 };
    expect(settings({ filter })).toEqual([{ pointer: '/filter/order', detail: 'must be one of 2, 4, 6, 8' }]);
    expect(settings({ filter: [{ ...filter, order: 4 }, filter] }).map((e) => e.pointer)).toEqual([
      '/filter/1/order',
    ]);
    const notch = { kind: 'notch', family: 'butterworth', order: 2, lowHz: 60, highHz: 50 };
    expect(settings({ filter: notch })).toEqual([
      { pointer: '/filter/highHz', detail: 'must be above lowHz' },
    ]);
  });

  it('say where a choice is none at all', () => {
    expect(settings({ filter: { kind: 'comb' } }).map((e) => e.pointer)).toEqual(['/filter/kind']);
    expect(settings({ band: { mode: 'none' } }).map((e) => e.pointer)).toEqual(['/band/mode']);
  });
});

describe('pointerOf', () => {
  it('escapes as RFC 6901 does', () => {
    expect(pointerOf([])).toBe('');
    expect(pointerOf(['a/b', 0, 'm~n'])).toBe('/a~1b/0/m~0n');
  });
});
