import { expect, it } from 'vitest';
import { createReadingRoom, defaultReadingLimits } from './reading-room';

const mib = 1024 * 1024;

it('one rig with slow recordings keeps no other rig, and not even its own board, from sending', () => {
  const room = createReadingRoom();
  expect(room.enter('slow', 64 * mib)).toBeDefined();
  expect(room.enter('slow', 64 * mib)).toBeUndefined();
  expect(room.enter('slow', mib)).toBeDefined();
  expect(room.enter('other', 64 * mib)).toBeDefined();
});

it('many rigs with slow recordings keep no board from sending', () => {
  const room = createReadingRoom();
  const letIn = Array.from({ length: 10 }, (_, i) => room.enter(`rig-${i}`, 64 * mib)).filter(Boolean);
  expect(letIn.length * 64 * mib).toBeLessThanOrEqual(defaultReadingLimits.large);
  expect(room.enter('board', 4096)).toBeDefined();
});

it('gives back what was taken', () => {
  const room = createReadingRoom({ large: 10 * mib, largeOfRig: 10 * mib, small: 10, smallOfRig: 10 });
  const leave = room.enter('a', 8 * mib);
  expect(room.enter('a', 4 * mib)).toBeUndefined();
  leave?.();
  expect(room.enter('a', 4 * mib)).toBeDefined();
});
