/** How shafts turn in the cases: programmes of speed that begin and end alike. Speeds in rpm of the shaft. */
import type { MotionSpec, Ripple, SpeedSegment } from '@/simulator/motion';
import type { Draw } from '@/tests/accuracy/findings/draw';

/** Torque ripple of a sound drive. */
export function drawRipple(draw: Draw, most = 0.012): Ripple[] {
  const ripple: Ripple[] = [];
  if (draw.chance(0.5))
    ripple.push({ order: 1, fraction: draw.uniform(0, 0.003), phaseDeg: draw.uniform(0, 360) });
  const others = draw.integer(0, 2);
  for (let i = 0; i < others; i += 1)
    ripple.push({
      order: draw.integer(2, 7),
      fraction: draw.uniform(0, most),
      phaseDeg: draw.uniform(0, 360),
    });
  return ripple;
}

/** One speed for `seconds`. */
export function steadyMotion(draw: Draw, rpm: number, seconds: number): MotionSpec {
  return { startRpm: rpm, segments: [{ durationS: seconds, toRpm: rpm }], ripple: drawRipple(draw) };
}

/** From one speed to another and back within `timing`, by the same ways up and down. */
export function passingMotion(
  draw: Draw,
  rpm: number,
  otherRpm: number,
  { beginS, wholeS, endS, seconds }: { beginS: number; wholeS: number; endS: number; seconds: number },
): MotionSpec {
  const changeS = wholeS - beginS;
  return {
    startRpm: rpm,
    segments: [
      { durationS: beginS, toRpm: rpm },
      { durationS: changeS, toRpm: otherRpm },
      { durationS: endS - changeS - wholeS, toRpm: otherRpm },
      { durationS: changeS, toRpm: rpm },
      { durationS: seconds, toRpm: rpm },
    ],
    ripple: drawRipple(draw),
  };
}

/** Slowly up and down between `low` times the speed and the speed. */
export function swayingMotion(draw: Draw, rpm: number, seconds: number, low = 0.75): MotionSpec {
  const segments: SpeedSegment[] = [];
  let fast = true;
  for (let leftS = seconds; leftS > 0; fast = !fast) {
    const changeS = draw.uniform(2, 5);
    const holdS = draw.uniform(2, 6);
    segments.push({ durationS: holdS, toRpm: fast ? rpm : low * rpm });
    segments.push({ durationS: changeS, toRpm: fast ? low * rpm : rpm, shape: 'smooth' });
    leftS -= holdS + changeS;
  }
  if (!fast) segments.push({ durationS: 3, toRpm: rpm, shape: 'smooth' });
  return { startRpm: rpm, segments, ripple: drawRipple(draw) };
}

/**
 * A day at the bench: starts, stops, changes of speed, crawling; both ways where asked. At least `seconds` long.
 * `favourites`: speeds that are taken more often than by chance.
 */
export function busyMotion(
  draw: Draw,
  rpm: number,
  seconds: number,
  options: { reverses: boolean; favourites: readonly number[] },
): MotionSpec {
  const segments: SpeedSegment[] = [];
  const startRpm = draw.chance(0.5) ? 0 : rpm * draw.uniform(0.4, 1);
  let now = startRpm;
  let lastS = 0;
  const add = (durationS: number, toRpm: number) => {
    segments.push({ durationS, toRpm, shape: draw.chance(0.5) ? 'smooth' : 'linear' });
    lastS += durationS;
    now = toRpm;
  };
  while (lastS < seconds) {
    const kind = draw.uniform(0, 1);
    if (kind < 0.25) {
      if (now !== 0) add(draw.log(0.4, 6), 0);
      add(draw.uniform(0.5, 6), 0);
      const way = options.reverses && draw.chance(0.6) ? -1 : 1;
      add(draw.log(0.4, 5), way * rpm * draw.uniform(0.3, 1));
    } else if (kind < 0.35) {
      add(draw.uniform(1, 5), (now < 0 ? -1 : 1) * rpm * draw.log(0.02, 0.15));
    } else {
      const favourite = options.favourites.length > 0 && draw.chance(0.5);
      const to = favourite ? draw.pick(options.favourites) : rpm * draw.uniform(0.3, 1);
      add(draw.log(0.5, 8), (now < 0 ? -1 : 1) * to);
    }
    add(draw.uniform(4, 20), now);
  }
  if (now * startRpm < 0) add(2, 0);
  if (now !== startRpm) add(3, startRpm);
  return { startRpm, segments, ripple: drawRipple(draw) };
}

export function lengthOf({ segments }: MotionSpec): number {
  return segments.reduce((sum, { durationS }) => sum + durationS, 0);
}
