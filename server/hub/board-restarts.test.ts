import { describe, expect, it } from 'vitest';
import { BoardRestarts, postedStreamPrefix } from './board-restarts';

const minuteMs = 60_000;
const ended = (atMs: number, name = 'boot-1') => ({ name, lastBlockAtMs: atMs });

describe('restarts of a board', () => {
  it('are counted over ten minutes', () => {
    const restarts = new BoardRestarts();
    const at = [0, 3, 6, 9.9, 10.5, 25, 60];
    expect(
      at.map((minutes) => restarts.note(ended(minutes * minuteMs - 2000), 'boot-2', minutes * minuteMs)),
    ).toEqual([1, 2, 3, 4, 4, 1, 1]);
  });

  it('are none where the stream before had ended for longer than that', () => {
    const restarts = new BoardRestarts();
    expect(restarts.note(ended(0), 'boot-2', 10 * minuteMs + 1)).toBeNull();
    expect(restarts.note(ended(0), 'boot-2', 10 * minuteMs)).toBe(1);
  });

  it('are none where one of the streams is a single post', () => {
    const restarts = new BoardRestarts();
    expect(restarts.note(ended(0, `${postedStreamPrefix}1`), 'boot-2', 1000)).toBeNull();
    expect(restarts.note(ended(0), `${postedStreamPrefix}2`, 1000)).toBeNull();
    expect(restarts.note(ended(0), 'boot-2', 1000)).toBe(1);
  });
});
