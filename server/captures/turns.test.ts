import { describe, expect, it } from 'vitest';
import { WorkQueue } from './turns';

/** A job that ends when told to. */
function job() {
  let end = () => {};
  const done = new Promise<void>((resolve) => (end = resolve));
  return { done, end };
}

describe('WorkQueue', () => {
  it('runs so many at once, the others in order, and goes on after a failure', async () => {
    const queue = new WorkQueue({ running: 2, waiting: 2 });
    const started: number[] = [];
    const jobs = [job(), job(), job(), job()];
    const results = jobs.map(({ done }, i) =>
      queue.run(async () => {
        started.push(i);
        await done;
        if (i === 0) throw new Error('broken');
        return i;
      }),
    );
    expect(started).toEqual([0, 1]);
    expect(queue.full).toBe(true);
    jobs[0]!.end();
    await expect(results[0]).rejects.toThrow('broken');
    expect(started).toEqual([0, 1, 2]);
    expect(queue.full).toBe(false);
    for (const { end } of jobs) end();
    expect(await Promise.all(results.slice(1))).toEqual([1, 2, 3]);
    expect(await queue.run(async () => 'again')).toBe('again');
  });
});
