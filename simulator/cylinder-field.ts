/**
 * Field of a cylinder magnet, uniformly magnetised along its axis, in air.
 * On the axis: B(z) = (Br/2) [ (z+L)/sqrt(R^2+(z+L)^2) - z/sqrt(R^2+z^2) ].
 * Off the axis, exact: N. Derby and S. Olbert, "Cylindrical magnets and ideal solenoids", Am. J. Phys. 78 (2010) 229,
 * with the generalised complete elliptic integral by Bulirsch's iteration (Numer. Math. 13 (1969) 305).
 */

export type CylinderMagnet = { diameterMm: number; lengthMm: number; remanenceT: number };

/** Field on the axis at `gapMm` before the face, mT. */
export function axialFieldMt(magnet: CylinderMagnet, gapMm: number): number {
  const r = magnet.diameterMm / 2;
  const far = gapMm + magnet.lengthMm;
  return 500 * magnet.remanenceT * (far / Math.hypot(r, far) - gapMm / Math.hypot(r, gapMm));
}

/** Axial component at `gapMm` before the face and `offsetMm` beside the axis, mT. */
export function slideByFieldMt(magnet: CylinderMagnet, gapMm: number, offsetMm: number): number {
  const a = magnet.diameterMm / 2;
  let rho = Math.abs(offsetMm);
  // On the rim itself the formula is 0/0; a picometre beside it is the same field.
  if (Math.abs(rho - a) < 1e-9) rho = a + 1e-9;
  const g = (a - rho) / (a + rho);
  const near = end(gapMm);
  const far = end(gapMm + magnet.lengthMm);
  return ((1000 * magnet.remanenceT) / Math.PI) * (a / (a + rho)) * (far - near);

  function end(z: number): number {
    const outer = Math.hypot(z, rho + a);
    return (z / outer) * elliptic(Math.hypot(z, a - rho) / outer, g * g, 1, g);
  }
}

/** Integral over 0..pi/2 of (c cos^2 + s sin^2) / ((cos^2 + p sin^2) sqrt(cos^2 + kc^2 sin^2)), for p > 0. */
function elliptic(kc: number, p: number, c: number, s: number): number {
  let k = Math.abs(kc);
  let em = 1;
  let pp = Math.sqrt(p);
  let cc = c;
  let ss = s / pp;
  let product = k;
  for (let step = 0; step < 40; step += 1) {
    const before = cc;
    cc += ss / pp;
    const ratio = product / pp;
    ss = 2 * (ss + before * ratio);
    pp += ratio;
    const emBefore = em;
    em += k;
    if (Math.abs(emBefore - k) <= emBefore * 1e-10) break;
    k = 2 * Math.sqrt(product);
    product = k * em;
  }
  return ((Math.PI / 2) * (ss + cc * em)) / (em * (em + pp));
}

const stepMm = 0.05;

/**
 * Axial field by distance beside the axis and gap, from rows computed when first asked for and interpolated between:
 * quick enough for each sample of a run.
 */
export function createMagnetProfile(magnet: CylinderMagnet): (offsetMm: number, gapMm: number) => number {
  const reach = 400;
  const rows = new Map<number, Float64Array>();
  function row(number: number): Float64Array {
    let values = rows.get(number);
    if (!values) {
      values = new Float64Array(reach + 2);
      for (let i = 0; i < reach; i += 1) values[i] = slideByFieldMt(magnet, number * stepMm, i * stepMm);
      rows.set(number, values);
    }
    return values;
  }
  return (offsetMm, gapMm) => {
    const x = offsetMm / stepMm;
    const i = Math.floor(x);
    if (i >= reach) return 0;
    const y = Math.max(1, gapMm / stepMm);
    const j = Math.floor(y);
    const lower = row(j);
    const upper = row(j + 1);
    const a = (lower[i] as number) + ((lower[i + 1] as number) - (lower[i] as number)) * (x - i);
    const b = (upper[i] as number) + ((upper[i + 1] as number) - (upper[i] as number)) * (x - i);
    return a + (b - a) * (y - j);
  };
}
