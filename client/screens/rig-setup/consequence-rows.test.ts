import { describe, expect, it } from 'vitest';
import { consequenceRows, sensorSentences, wheelOf } from '@/client/screens/rig-setup/consequence-rows';
import { emptyDraft } from '@/client/screens/rig-setup/draft';

const draft = (pulsesPerTurn: string, more: object = {}) => ({
  ...emptyDraft,
  ratedRpm: '3000',
  ...more,
  wheel: { ...emptyDraft.wheel, pulsesPerTurn },
});

describe('what the form says while one types', () => {
  it('gives the tooth frequency and the samples a tooth', () => {
    const { facts, warning } = consequenceRows(wheelOf(draft('60'))!, 60_000);
    const values = Object.fromEntries(facts.map((f) => [f.name, f.value]));
    // 60 teeth at 50 turns a second.
    expect(values['Tooth frequency']).toBe('3000 Hz');
    expect(values['Samples a tooth']).toBe('20');
    expect(values['Reads stopped below']).toBe('0.5 rpm');
    expect(values['that is, no edge for']).toBe('2 s');
    expect(warning).toBeNull();
  });

  it('says how many samples the rated speed needs', () => {
    const { facts, warning } = consequenceRows(wheelOf(draft('60', { sensing: 'quadrature' }))!, 20_000);
    expect(warning).toContain('24000 a second');
    expect(facts[1]).toMatchObject({ value: '6.67', tone: 'warn' });
  });

  it('tells what rate the widths of pulses take, and that no direction will be said below it', () => {
    const widthClasses = [
      { widthUs: '90', means: 'forward' as const },
      { widthUs: '180', means: 'reverse' as const },
    ];
    const typed = { ...draft('48', { sensing: 'width-coded' }) };
    const wheel = wheelOf({ ...typed, wheel: { ...typed.wheel, widthClasses } })!;
    const slow = consequenceRows(wheel, 20_000);
    expect(slow.facts.find((f) => f.name === 'Samples to tell the widths')).toMatchObject({
      value: '44445 a second',
      tone: 'warn',
    });
    expect(slow.warning).toContain('no direction');
    expect(consequenceRows(wheel, 100_000).warning).toBeNull();
    const none = consequenceRows(wheel, 5_000);
    expect(none.warning).toContain('not even the speed');
    expect(none.facts.find((f) => f.name === 'Fastest at all')?.value).toBe('none');
  });

  it('tells what the kinds of the sensors mean for count and polarity', () => {
    const [channel] = emptyDraft.channels;
    const of = (kind: 'linear' | 'latch' | 'omnipolar') =>
      sensorSentences([{ ...channel!, sensor: { ...channel!.sensor, kind, activeLow: kind !== 'linear' } }]);
    expect(of('linear')).toEqual([]);
    expect(of('omnipolar')[0]).toContain('two pulses a pole pair');
    expect(of('latch')[0]).toContain('lets go only at the other pole');
    const latch = { ...channel!, sensor: { ...channel!.sensor, kind: 'latch' as const, activeLow: true } };
    const three = sensorSentences(['U', 'V', 'W'].map((name) => ({ ...latch, name })));
    expect(three).toHaveLength(1);
    expect(three[0]).toMatch(/^Channel U is a latch: .* The same holds for V and W\.$/);
  });

  it('says what is missing', () => {
    const { facts } = consequenceRows(wheelOf(draft('60', { ratedRpm: '' }))!, null);
    expect(facts.slice(0, 3).map((f) => f.value)).toEqual([
      'needs rated speed',
      'needs sample rate',
      'needs sample rate',
    ]);
  });

  it('does not ask for a rate where the widths are what is wrong', () => {
    const typed = draft('48', { sensing: 'width-coded' });
    const widthClasses = [
      { widthUs: '90', means: 'forward' as const },
      { widthUs: '91', means: 'reverse' as const },
    ];
    const wheel = wheelOf({ ...typed, wheel: { ...typed.wheel, widthClasses } })!;
    const { facts } = consequenceRows(wheel, 100_000);
    expect(facts.find((f) => f.name === 'Fastest at all')?.value).toBe('not with this setup');
    expect(facts.find((f) => f.name === 'Tooth frequency')?.value).toBe('2400 Hz');
  });

  it.each(['', '0', '12.5', 'many', '2000000'])('says nothing of a wheel with %j pulses', (pulses) => {
    expect(wheelOf(draft(pulses))).toBeNull();
  });
});
