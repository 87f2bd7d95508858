import { describe, expect, it } from 'vitest';
import { arcPath, polar, turnWords, wheelDrawing } from '@/client/drawings/wheel-geometry';
import type { WheelFace } from '@/signal/model';

function face(
  count: number,
  change: (i: number) => Partial<WheelFace['positions'][number]> = () => ({}),
): WheelFace {
  return {
    numbered: true,
    angleDeg: 0,
    positions: Array.from({ length: count }, (_, i) => ({
      angleDeg: (360 * i) / count,
      spacingErrorDeg: 0,
      swingV: 2,
      missing: false,
      count: 10,
      ...change(i),
    })),
  };
}

describe('wheelDrawing', () => {
  it('draws a tooth as long as its swing', () => {
    const { marks } = wheelDrawing(
      face(4, (i) => (i === 1 ? { swingV: 1 } : {})),
      100,
    );
    const length = (i: number) => marks[i]!.outer - marks[i]!.inner;
    expect(length(1)).toBeCloseTo(length(0) / 2, 9);
    expect(marks[0]!.outer).toBeLessThanOrEqual(100);
  });
  it('scales spacing errors to what can be seen and stays within the radius', () => {
    const drawing = wheelDrawing(
      face(60, (i) => ({ spacingErrorDeg: i === 3 ? 0.3 : 0 })),
      100,
    );
    expect(drawing.scale).toBe(20);
    expect(drawing.marks[3]!.inner - drawing.marks[0]!.inner).toBeCloseTo(
      ((0.3 * Math.PI) / 180) * 68 * 20,
      6,
    );
    expect(Math.max(...drawing.marks.map((m) => m.outer))).toBeLessThanOrEqual(100);
  });
  it('opens the ring at missing teeth, also over the top', () => {
    const { arcs, marks } = wheelDrawing(
      face(12, (i) => (i === 0 || i === 11 ? { missing: true, swingV: null } : {})),
      100,
    );
    expect(arcs).toHaveLength(1);
    expect(arcs[0]![0]).toBeCloseTo(15, 6);
    expect(arcs[0]![1]).toBeCloseTo(315, 6);
    expect(marks[0]!.kind).toBe('missing');
  });
  it('tells an unseen tooth from a missing one', () => {
    expect(
      wheelDrawing(
        face(4, () => ({ swingV: null })),
        100,
      ).marks[0]!.kind,
    ).toBe('unseen');
  });
});

describe('polar', () => {
  it('has 0 at the top and grows clockwise', () => {
    expect(polar(50, 10, 0).y).toBeCloseTo(40, 9);
    expect(polar(50, 10, 90).x).toBeCloseTo(60, 9);
  });
  it('closes a whole turn', () => {
    expect(arcPath(50, 10, 0, 360).match(/A/g)).toHaveLength(2);
  });
});

describe('turnWords', () => {
  it('says the speed once the eye cannot follow', () => {
    expect(turnWords(1500, 10)).toBe('25 turns a second');
    expect(turnWords(-200, 10)).toBe('3.3 turns a second');
    expect(turnWords(60, 370)).toBe('at 10°');
    expect(turnWords(60, null)).toBe('angle unknown');
  });
});
