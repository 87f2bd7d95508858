/** What is wrong on the way from the board, and what usually mends it. */
import { short, time, whole } from '@/signal/finding-words/values';
import type { Wording } from '@/signal/finding-words/values';

export const hubWords = {
  'lost-samples': (_channel, evidence) => ({
    message: `${whole(evidence.lostSamples)} samples (${short(evidence.lostS)} s) never arrived, so counts and turns are lower bounds from here on.`,
    remedy:
      'Give the board a larger send buffer or a lower sample rate, and look at the link between board and hub.',
  }),
  'clock-drift': (_channel, evidence) => ({
    message: `The board samples ${short(Math.abs(Number(evidence.speedErrorPercent)))} % ${Number(evidence.driftPpm) > 0 ? 'faster' : 'slower'} than it declares (${short(evidence.driftPpm)} ppm, give or take ${short(evidence.errorPpm)}), so every speed is off by as much.`,
    remedy:
      "Time the board's sampling by a crystal, or let it declare the rate that it really has; the hub's own clock is the measure here.",
  }),
  'board-restart': (_channel, evidence) => ({
    message:
      Number(evidence.restarts) > 1
        ? `The board started anew ${whole(evidence.restarts)} times in ten minutes, so counts and turns began again each time.`
        : `The board started anew after ${time(evidence.awayS)} without a block, so counts and turns begin again here.`,
    remedy:
      'Look at its supply (a motor that starts pulls it down), its watchdog and its reset wire, if nobody restarted it on purpose.',
  }),
} satisfies Record<string, Wording>;
