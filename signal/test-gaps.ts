/** Drives the sync with a wheel's gap by teeth of known places. */
import { judgeInterval, judgeWaiting } from '@/signal/gap-judge';
import { noGapAhead } from '@/signal/gap-proof';
import { createGapSync, moveOn } from '@/signal/gap-sync';
import type { GapSync, SyncState } from '@/signal/gap-sync';
import { normal, seeded } from '@/signal/test-signals';

export type Pulse = { t: number; place: number; extra: boolean };
export type Step = { pulse: Pulse; state: SyncState; position: number };
/** `nearAfter`: after each pulse but the first, whether no gap can come next. */
export type Driven = { sync: GapSync; steps: Step[]; positions: number; nearAfter: boolean[] };

/** Teeth one after another, in the order in which the tooth train asks. */
export function drive(positions: number, missing: number, pulses: readonly Pulse[]): Driven {
  const sync = createGapSync(positions, missing);
  const steps: Step[] = [];
  const nearAfter: boolean[] = [];
  let extraPositions = 0;
  let waiting: Pulse | null = null;
  const place = (pulse: Pulse, spans: number): void => {
    extraPositions += moveOn(sync, spans);
    steps.push({ pulse, state: sync.state, position: sync.position });
  };
  pulses.slice(1).forEach((pulse, k) => {
    sync.intervalS = pulse.t - pulses[k]!.t;
    if (waiting) {
      const spans = judgeWaiting(sync);
      if (spans === 0) extraPositions--;
      else place(waiting, spans);
      waiting = null;
    }
    const spans = judgeInterval(sync);
    if (spans > 0) place(pulse, spans);
    else waiting = pulse;
    nearAfter.push(noGapAhead(sync));
  });
  return { sync, steps, positions: pulses.length - 1 + extraPositions, nearAfter };
}

export const lossesOf = ({ sync }: Driven): number =>
  Object.values(sync.losses).reduce((sum, n) => sum + n, 0);

/** Said to be in sync, but at another position. */
export const wrongOf = ({ steps, sync }: Driven): Step[] =>
  steps.filter(
    ({ pulse, state, position }) =>
      state === 'synced' && !pulse.extra && position !== pulse.place % sync.positions,
  );

/** At one position a second, from `brakeAt` on braked evenly within `brakeS` to a twentieth; teeth are off by 2 %, rms. */
export const braked = (
  n: number,
  missing: number,
  brakeAt: number,
  brakeS: number,
  seed: number,
): Pulse[] => {
  const noise = normal(seeded(seed));
  const slow = 1 / 20;
  const slope = (1 - slow) / brakeS;
  const way = brakeS * (1 - (slope * brakeS) / 2);
  const timeOf = (place: number): number => {
    const past = place - brakeAt;
    if (past <= 0) return place;
    if (past >= way) return brakeAt + brakeS + (past - way) / slow;
    return brakeAt + (1 - Math.sqrt(1 - 2 * slope * past)) / slope;
  };
  return Array.from({ length: 9 * n }, (_, place) => ({ place, extra: false }))
    .filter(({ place }) => place % n < n - missing)
    .map(({ place, extra }) => ({ t: timeOf(place + 0.02 * noise()), place, extra }));
};
