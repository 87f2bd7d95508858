/** Edges found against the flanks that really passed, on a shaft that turns one way. */
import type { ToothPass } from '@/simulator/truth';
import type { Bench } from '@/tests/accuracy/rigs';
import type { Flank } from '@/tests/accuracy/run';

export type Match = {
  /** Flanks that had to be found, and how many were. */
  due: number;
  found: number;
  extra: number;
  /** Flanks that were found, with the instant of the edge. */
  pairs: { pass: ToothPass; midT: number }[];
};

/** An edge farther than this from each flank of its polarity belongs to none, positions. */
const reach = 0.25;

/** True flanks of a channel's signal, in order of time. */
export function passesOf({ rig }: Bench, channel: number, fromS: number, toS: number): ToothPass[] {
  const { placeDeg = 0, sensor } = rig.spec.channels[channel] ?? {};
  const passes = rig.truth.toothTimes(fromS, toS, placeDeg / 360 / rig.spec.wheel.positions);
  if (sensor?.kind === 'linear') return passes;
  // A switch pulls its line down where there is a field.
  return passes.map((pass) => ({ ...pass, rising: !pass.rising }));
}

/** Positions of the wheel that have gone by since the beginning, signed. */
export function positionsAt({ rig }: Bench, tS: number): number {
  return rig.truth.turnsAt(tS) * (rig.spec.gearRatio ?? 1) * rig.spec.wheel.positions;
}

/**
 * An edge belongs to the nearest flank of its polarity; a second one at the same flank is extra. Distance is taken as an
 * angle, so that a slow shaft and a quick one are judged alike.
 *
 * Due is each flank but the first of the run, before which the path cannot know on which side of the band the signal stands,
 * and those of the last position, which may not have reached the switching point.
 */
export function matchEdges(bench: Bench, channel: number, flanks: readonly Flank[], endS: number): Match {
  const match: Match = { due: 0, found: 0, extra: 0, pairs: [] };
  // An edge just before the end may belong to a flank just after it.
  const passes = passesOf(bench, channel, 0, 1.05 * endS);
  const last = Math.abs(positionsAt(bench, endS)) - 1;
  // A switching sensor wakes open: its first edge may be where it finds its state, and no flank of the wheel.
  const waking = bench.arrangement.sensor.kind === 'linear' ? 0 : 1;
  for (const rising of [true, false]) {
    const wanted = passes.filter((pass) => pass.rising === rising);
    const places = wanted.map((pass) => Math.abs(positionsAt(bench, pass.tS)));
    const owner = new Array<number>(wanted.length).fill(NaN);
    let i = 0;
    for (const flank of flanks) {
      if (flank.rising !== rising) continue;
      const at = Math.abs(positionsAt(bench, flank.midT));
      while (i + 1 < places.length && Math.abs(places[i + 1]! - at) <= Math.abs(places[i]! - at)) i += 1;
      const isOwn = i < places.length && Math.abs(places[i]! - at) <= reach && Number.isNaN(owner[i]!);
      if (isOwn) owner[i] = flank.midT;
      else if (at >= waking) match.extra += 1;
    }
    wanted.forEach((pass, k) => {
      if (pass === passes[0] || places[k]! > last) return;
      match.due += 1;
      if (Number.isNaN(owner[k]!)) return;
      match.found += 1;
      match.pairs.push({ pass, midT: owner[k]! });
    });
  }
  match.pairs.sort((a, b) => a.pass.tS - b.pass.tS);
  return match;
}
