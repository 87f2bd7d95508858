import { describe, expect, it } from 'vitest';
import { causeOf } from '@/signal/findings/causes';
import type { Finding, FindingCode } from '@/signal/model';

function finding(code: FindingCode, more: Partial<Finding> = {}): Finding {
  return {
    code,
    channel: 'A',
    from: 10,
    to: null,
    severity: 'warn',
    outcome: 'found',
    at: 10,
    evidence: {},
    message: '',
    remedy: '',
    causedBy: null,
    ...more,
  };
}

describe('what follows from what', () => {
  it('takes the nearest cause that is there, or that ended less than two seconds before', () => {
    const flip = finding('direction-flip', { channel: null });
    const lost = finding('lost-samples', { channel: null, from: 7, to: 8.5 });
    expect(causeOf(flip, [lost])).toBe('lost-samples');
    expect(causeOf(flip, [lost, finding('phase-error')])).toBe('phase-error');
    expect(causeOf(flip, [finding('lost-samples', { from: 5, to: 7.9 })])).toBeNull();
    expect(causeOf(flip, [finding('clipping')])).toBeNull();
  });

  it('takes the one that was there first where each may follow from the other', () => {
    const skips = finding('illegal-state', { channel: null });
    const weak = finding('weak-swing');
    expect(causeOf(skips, [weak])).toBe('weak-swing');
    // Said a little later it may have come first; much later it did not.
    expect(causeOf(skips, [finding('weak-swing', { from: 11.5 })])).toBe('weak-swing');
    const later = finding('weak-swing', { from: 13 });
    expect(causeOf(skips, [later])).toBeNull();
    expect(causeOf(later, [skips])).toBe('illegal-state');
    const ripple = finding('supply-ripple', { channel: null, from: 11 });
    for (const code of ['phase-error', 'illegal-state', 'direction-flip'] as const)
      expect(causeOf(finding(code), [ripple])).toBe('supply-ripple');
  });

  it('leaves channels apart, and takes nothing for a cause that cannot be told', () => {
    const shift = finding('duty-shift');
    expect(causeOf(shift, [finding('offset-drift')])).toBe('offset-drift');
    expect(causeOf(shift, [finding('offset-drift', { channel: 'B' })])).toBeNull();
    expect(causeOf(shift, [finding('supply-ripple', { channel: null })])).toBe('supply-ripple');
    const bounce = finding('edge-bounce');
    expect(causeOf(bounce, [finding('mains-hum')])).toBe('mains-hum');
    expect(causeOf(bounce, [finding('mains-hum', { outcome: 'cannot-tell' })])).toBeNull();
  });

  it('knows what a hold-off that eats teeth makes of both lines, and folds it under nothing', () => {
    const eaten = finding('wrong-count', { from: 11, evidence: { by: 'hold-off' } });
    const skips = finding('illegal-state', { channel: null });
    expect(causeOf(finding('phase-error', { channel: 'B' }), [eaten, skips])).toBe('wrong-count');
    expect(causeOf(skips, [eaten])).toBe('wrong-count');
    expect(causeOf(eaten, [skips])).toBeNull();
    expect(causeOf(skips, [finding('wrong-count', { evidence: { by: 'index' } })])).toBeNull();
    expect(causeOf(skips, [{ ...eaten, outcome: 'cannot-tell' }])).toBeNull();
    expect(causeOf(finding('clipping'), [eaten])).toBeNull();
  });

  it('does not accuse the wheel of what is noise, or left by a filter that takes its teeth away', () => {
    for (const against of ['noise', 'filter']) {
      const drowned = finding('weak-swing', { severity: 'fault', evidence: { against } });
      const chatter = finding('standstill-chatter');
      for (const code of ['extra-pulse', 'uneven-teeth', 'wrong-count', 'run-out', 'edge-bounce'] as const)
        expect(causeOf(finding(code), [drowned])).toBe('weak-swing');
      expect(causeOf(chatter, [drowned])).toBe('weak-swing');
      expect(causeOf(drowned, [chatter])).toBeNull();
      expect(causeOf(finding('extra-pulse', { channel: 'B' }), [drowned])).toBeNull();
      expect(causeOf(finding('extra-pulse'), [{ ...drowned, severity: 'warn' }])).toBeNull();
    }
    expect(causeOf(finding('uneven-teeth'), [finding('near-alias')])).toBe('near-alias');
  });

  it('never folds a finding under one of its own consequences', () => {
    const missing = finding('missing-tooth', { causedBy: 'weak-swing' });
    const runOut = finding('run-out', { causedBy: 'missing-tooth' });
    const swing = finding('weak-swing');
    expect(causeOf(swing, [missing, runOut])).toBeNull();
    expect(causeOf(swing, [missing, finding('run-out')])).toBe('run-out');
  });
});
