/**
 * Randomness that depends only on (seed, index), so that a sample's noise is the same however the run is cut into
 * blocks. Mixer: the 32-bit finaliser of MurmurHash3 (Austin Appleby, public domain), applied twice.
 */

function mix(h: number): number {
  h ^= h >>> 16;
  h = Math.imul(h, 0x85ebca6b);
  h ^= h >>> 13;
  h = Math.imul(h, 0xc2b2ae35);
  return h ^ (h >>> 16);
}

/** 32 bits that depend on both numbers; `index` may be any non-negative integer up to 2^53. */
export function hash32(seed: number, index: number): number {
  const high = (index / 4294967296) | 0;
  return mix(mix((seed | 0) ^ Math.imul(high, 0x27d4eb2f)) ^ Math.imul(index | 0, 0x9e3779b1)) >>> 0;
}

/** Uniform in (0, 1). */
export function uniformAt(seed: number, index: number): number {
  return (hash32(seed, index) + 0.5) / 4294967296;
}

/** Standard normal (mean 0, rms 1). Box and Muller, Ann. Math. Stat. 29 (1958) 610. */
export function normalAt(seed: number, index: number): number {
  const radius = Math.sqrt(-2 * Math.log(uniformAt(seed, index)));
  return radius * Math.cos(2 * Math.PI * uniformAt(seed ^ 0x5bd1e995, index));
}

/** A seed of its own for a named part of a rig. */
export function subSeed(seed: number, name: string): number {
  let h = seed | 0;
  for (let i = 0; i < name.length; i += 1) h = mix(h ^ Math.imul(name.charCodeAt(i) + 1, 0x9e3779b1));
  return h;
}
