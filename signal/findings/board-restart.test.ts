import { describe, expect, it } from 'vitest';
import { BoardRestartRule } from '@/signal/findings/board-restart';
import { sampled, testPipeline, testRig } from '@/signal/test-signals';

const restart = (restarts: number, awayS = 2) => ({ kind: 'restart', awayS, restarts }) as const;

/** Ticks ten times a second up to and including `toS`. */
function pass(rule: BoardRestartRule, fromS: number, toS: number): void {
  for (let k = Math.round(fromS * 10); k <= Math.round(toS * 10); k++) rule.tick(k / 10);
}

describe('board restart', () => {
  it.each([
    [1, 'warn'],
    [2, 'warn'],
    [3, 'fault'],
    [12, 'fault'],
  ] as const)('%d within ten minutes are a %s, from where the new stream begins', (restarts, severity) => {
    const rule = new BoardRestartRule();
    rule.note(restart(restarts, 4.5), 0);
    expect(rule.latches[0]!.open).toMatchObject({
      code: 'board-restart',
      channel: null,
      severity,
      outcome: 'found',
      from: 0,
      at: 0,
      to: null,
      evidence: { awayS: 4.5, restarts },
    });
  });

  it('is said for a minute, and then is over', () => {
    const rule = new BoardRestartRule();
    const latch = rule.latches[0]!;
    rule.note(restart(1), 0);
    pass(rule, 0, 59.9);
    expect(latch.open).not.toBeNull();
    expect(latch.closed).toEqual([]);
    pass(rule, 60, 60);
    expect(latch.open).toBeNull();
    expect(latch.closed).toMatchObject([{ code: 'board-restart', from: 0, at: 0, to: 0 }]);
    pass(rule, 60.1, 200);
    expect(latch.closed).toHaveLength(1);
  });

  it('is one finding while it lasts, and follows the count of the last ten minutes up and down', () => {
    const rule = new BoardRestartRule();
    const latch = rule.latches[0]!;
    const seen = [2, 3, 2].map((restarts, k) => {
      pass(rule, 40 * k, 40 * k + 39.9);
      rule.note(restart(restarts), 40 * (k + 1));
      return [latch.open!.severity, latch.open!.from, latch.open!.evidence.restarts];
    });
    expect(seen).toEqual([
      ['warn', 40, 2],
      ['fault', 40, 3],
      ['warn', 40, 2],
    ]);
    pass(rule, 120, 180);
    expect(latch.open).toBeNull();
    expect(latch.closed).toMatchObject([{ from: 40, at: 40, to: 120 }]);
  });

  it('is never said of blocks that merely arrive, late or not, nor of gaps or stand-still', () => {
    const pipeline = testPipeline(testRig('single', 24), 1000);
    const volts = sampled(1000, 1000, (t) => 1.65 + Math.sin(2 * Math.PI * 40 * t));
    for (let k = 1; k <= 20; k++) {
      pipeline.process([k < 10 ? volts : volts.subarray(0, 1).slice().fill(1.65)], k < 10 ? 1000 : 1);
      pipeline.note({ kind: 'arrival', streamS: k, hubS: k + (k % 3) });
      if (k % 5 === 0) pipeline.skip(500, k % 2 === 0);
    }
    const codes = [...pipeline.output.closedFindings, ...pipeline.status().findings].map(({ code }) => code);
    expect(codes).toContain('lost-samples');
    expect(codes).not.toContain('board-restart');
    pipeline.note(restart(1));
    expect(pipeline.status().findings.map(({ code }) => code)).toContain('board-restart');
  });
});
