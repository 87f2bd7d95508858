/** The part of a wheel's unevenness that changes slowly from tooth to tooth, which differences of neighbours do not show. */
const slowOrders = 3;
/** An order stands out where it is so many times what chance makes of it. */
const mostByChance = 2;

/**
 * Variance of the share by which a pitch is off, as far as third differences do not see it: by the first three orders of the
 * turn (run-out, oval, three-lobed), where they stand out of what teeth that are off at random make of them (in the
 * mean 2 / N of their variance each).
 * @param offsets of the teeth, positions. @param counts 0 where there is no tooth.
 */
export function slowUnevenness(offsets: Float64Array, counts: Uint16Array): number {
  const n = offsets.length;
  const chance = (mostByChance * 2 * randomVariance(offsets, counts)) / n;
  let variance = 0;
  for (let order = 1; order <= slowOrders && 2 * order < n; order++) {
    const angle = (2 * Math.PI * order) / n;
    const turnCos = Math.cos(angle);
    const turnSin = Math.sin(angle);
    let cos = 1;
    let sin = 0;
    let re = 0;
    let im = 0;
    for (let k = 0; k < n; k++) {
      re += offsets[k]! * cos;
      im += offsets[k]! * sin;
      const next = cos * turnCos - sin * turnSin;
      sin = sin * turnCos + cos * turnSin;
      cos = next;
    }
    const power = (2 * (re * re + im * im)) / (n * n) - chance;
    const gain = (2 * Math.sin(angle / 2)) ** 2;
    const unseen = 1 - (gain * gain) / 10;
    if (power > 0 && unseen > 0) variance += unseen * gain * power;
  }
  return variance;
}

/** Variance of the offsets as third differences see it: teeth at random, whose third differences have 20 times theirs. */
function randomVariance(offsets: Float64Array, counts: Uint16Array): number {
  const n = offsets.length;
  let squares = 0;
  let seen = 0;
  let row = 0;
  for (let k = 0; k < n + 3; k++) {
    row = counts[k % n] === 0 ? 0 : row + 1;
    if (row < 4) continue;
    const inner = offsets[(k - 1) % n]! - offsets[(k - 2) % n]!;
    squares += (offsets[k % n]! - 3 * inner - offsets[(k - 3) % n]!) ** 2;
    seen++;
  }
  return seen > 0 ? squares / (20 * seen) : 0;
}
