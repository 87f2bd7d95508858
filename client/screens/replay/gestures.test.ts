import { describe, expect, it } from 'vitest';
import { keyMove, pinchMove, wheelFactor } from '@/client/screens/replay/gestures';

const p = (x: number) => ({ x, y: 0 });

describe('pinchMove', () => {
  it('zooms closer when fingers part and pans when they move together', () => {
    expect(pinchMove([p(100), p(200)], [p(50), p(250)])).toEqual({ factor: 0.5, aboutX: 150, panPx: 0 });
    expect(pinchMove([p(100), p(200)], [p(130), p(230)])).toEqual({ factor: 1, aboutX: 180, panPx: 30 });
  });
  it('does not leap when fingers touch', () => {
    expect(pinchMove([p(100), p(100)], [p(100), p(101)]).factor).toBe(1);
  });
});

describe('wheelFactor', () => {
  it('goes both ways by the same', () => {
    expect(wheelFactor(100) * wheelFactor(-100)).toBeCloseTo(1, 12);
    expect(wheelFactor(4000)).toBe(wheelFactor(100));
  });
});

describe('keyMove', () => {
  it('reaches every move without dragging', () => {
    const kinds = ['ArrowLeft', ',', '+', 'Home', ' '].map((key) => keyMove(key, false)?.kind);
    expect(kinds).toEqual(['step', 'jump', 'zoom', 'to', 'play']);
    expect(keyMove('Tab', false)).toBeNull();
  });
});
