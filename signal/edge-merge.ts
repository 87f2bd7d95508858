/** Hands the channels' edges to the motion in order of time, as far as every channel has decided. */
import type { ChannelPath } from '@/signal/channel-path';
import type { EdgeQueue } from '@/signal/columns';
import type { Motion } from '@/signal/motion';

/** A channel that has a place in the sensing arrangement, 0 for A or U. */
export type Lane = { path: ChannelPath; queue: EdgeQueue; role: number };

/**
 * An edge is handed on only once no channel can still show an earlier one; what is not decided stays in its queue. To be
 * called after each chunk, when all channels have seen the same samples.
 */
export function mergeEdges(lanes: readonly Lane[], motion: Motion): void {
  let decided = Infinity;
  for (let m = 0; m < lanes.length; m++) decided = Math.min(decided, lanes[m]!.path.decidedUpTo);
  if (lanes.length === 1) takeAll(lanes[0]!, decided, motion);
  else takeInOrder(lanes, decided, motion);
  if (decided < Infinity) motion.quietUpTo(decided);
}

function takeAll({ queue, role }: Lane, decided: number, motion: Motion): void {
  while (queue.head < queue.count && queue.at[queue.head]! <= decided) motion.take(queue, queue.head++, role);
}

function takeInOrder(lanes: readonly Lane[], decided: number, motion: Motion): void {
  for (;;) {
    let earliest: Lane | null = null;
    let at = Infinity;
    for (let m = 0; m < lanes.length; m++) {
      const { queue } = lanes[m]!;
      if (queue.head === queue.count || queue.at[queue.head]! >= at) continue;
      at = queue.at[queue.head]!;
      earliest = lanes[m]!;
    }
    if (!earliest || at > decided) return;
    motion.take(earliest.queue, earliest.queue.head++, earliest.role);
  }
}
