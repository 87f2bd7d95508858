import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { contrast, over } from '@/client/theme/contrast';
import { schemes } from '@/client/theme/tokens';
import type { ColourName, Scheme } from '@/client/theme/tokens';

const both = Object.keys(schemes) as Scheme[];
const grounds: ColourName[] = ['ground', 'plate', 'plateRaised'];
const texts: ColourName[] = [
  'scribe',
  'scribeSoft',
  'dye',
  'forward',
  'reverse',
  'still',
  'warn',
  'fault',
  'good',
];

describe('contrast', () => {
  it.each([
    ['#777777', 4.4781],
    ['#767676', 4.5422],
    ['#000000', 21],
    ['#949494', 3.0335],
    ['#959595', 2.9953],
  ])('%s on white is %f', (colour, ratio) => {
    expect(contrast(colour, '#FFFFFF')).toBeCloseTo(ratio, 3);
  });

  it.each(both)('every text of %s reaches 4.5 on every ground', (scheme) => {
    const colours = schemes[scheme];
    for (const ground of grounds) {
      for (const text of texts) {
        expect(contrast(colours[text], colours[ground]), `${text} on ${ground}`).toBeGreaterThanOrEqual(4.5);
      }
    }
    expect(contrast(colours.onDye, colours.dye)).toBeGreaterThanOrEqual(4.5);
    expect(contrast(colours.plate, colours.fault)).toBeGreaterThanOrEqual(4.5);
  });

  it.each(both)('trace, band edge and marks of %s reach 3 inside the band', (scheme) => {
    const colours = schemes[scheme];
    const band = over(colours.band, colours.plate);
    for (const line of ['scribe', 'dye', 'fault', 'warn'] as const) {
      expect(contrast(colours[line], band), line).toBeGreaterThanOrEqual(3);
    }
  });
});

describe('page shell', () => {
  const page = readFileSync(new URL('../../public/index.html', import.meta.url), 'utf8').toLowerCase();

  it.each(both)('paints the ground of %s before the app starts', (scheme) => {
    for (const name of ['ground', 'scribe', 'dye'] as const) {
      expect(page).toContain(`--${name}: ${schemes[scheme][name].toLowerCase()}`);
    }
  });

  it('lets people zoom and names its language', () => {
    expect(page).not.toMatch(/user-scalable|maximum-scale/);
    expect(page).toMatch(/<html lang="en">/);
  });
});
