/**
 * How a shaft turns, in closed form. A programme of speed segments gives the mean angle m(t); torque ripple that is
 * locked to the shaft bends it: turns = m + sum (f / (2 pi k)) (sin(2 pi k m + p) - sin p), so that the speed is
 * m' (1 + sum f cos(2 pi k m + p)). With sum f < 1 the shaft never turns back by itself.
 */

export type SpeedSegment = {
  durationS: number;
  toRpm: number;
  /** linear: constant acceleration; smooth: half a cosine, no jerk at either end. */
  shape?: 'linear' | 'smooth';
};
export type Ripple = { order: number; fraction: number; phaseDeg?: number };
export type MotionSpec = { startRpm: number; segments: SpeedSegment[]; ripple?: Ripple[] };

type Piece = { beginS: number; durationS: number; from: number; to: number; smooth: boolean; turns: number };

export type Motion = {
  /** Length of the programme; it repeats for ever. */
  periodS: number;
  /** Turns of the shaft since time 0, signed, exact. */
  turnsAt(tS: number): number;
  /** Turns per second, signed, exact. */
  speedAt(tS: number): number;
  /** The instants in [fromS, toS) that part the time into stretches in which the shaft turns one way only. */
  monotoneParts(fromS: number, toS: number): { fromS: number; toS: number }[];
};

/** Throws where the programme does not end at the speed at which it begins, or a smooth segment changes sign. */
export function createMotion(spec: MotionSpec): Motion {
  const pieces = toPieces(spec);
  const last = pieces[pieces.length - 1];
  if (!last) throw new Error('a motion needs at least one segment');
  if (Math.abs(last.to * 60 - spec.startRpm) > 1e-9) throw new Error('a motion must end at its startRpm');
  const ripple = (spec.ripple ?? []).map((r) => {
    const phase = ((r.phaseDeg ?? 0) * Math.PI) / 180;
    return { k: 2 * Math.PI * r.order, fraction: r.fraction, phase, atZero: Math.sin(phase) };
  });
  if (ripple.reduce((sum, r) => sum + Math.abs(r.fraction), 0) >= 1)
    throw new Error('ripple must stay below 1');
  const periodS = last.beginS + last.durationS;
  const turnsPerPeriod = last.turns + pieceTurns(last, last.durationS);
  let at = 0;

  function find(phaseS: number): Piece {
    let piece = pieces[at] as Piece;
    while (phaseS < piece.beginS) piece = pieces[(at -= 1)] as Piece;
    while (phaseS >= piece.beginS + piece.durationS && at < pieces.length - 1)
      piece = pieces[(at += 1)] as Piece;
    return piece;
  }
  function meanAt(tS: number): number {
    const period = Math.floor(tS / periodS);
    const phaseS = tS - period * periodS;
    const piece = find(phaseS);
    return period * turnsPerPeriod + piece.turns + pieceTurns(piece, phaseS - piece.beginS);
  }
  function turnsAt(tS: number): number {
    const mean = meanAt(tS);
    let turns = mean;
    for (const r of ripple) turns += (r.fraction / r.k) * (Math.sin(r.k * mean + r.phase) - r.atZero);
    return turns;
  }
  function speedAt(tS: number): number {
    const phaseS = tS - Math.floor(tS / periodS) * periodS;
    const piece = find(phaseS);
    const mean = meanAt(tS);
    let factor = 1;
    for (const r of ripple) factor += r.fraction * Math.cos(r.k * mean + r.phase);
    return pieceSpeed(piece, phaseS - piece.beginS) * factor;
  }
  function monotoneParts(fromS: number, toS: number) {
    const parts: { fromS: number; toS: number }[] = [];
    for (let period = Math.floor(fromS / periodS); period * periodS < toS; period += 1) {
      for (const piece of pieces) {
        const begin = Math.max(fromS, period * periodS + piece.beginS);
        const end = Math.min(toS, period * periodS + piece.beginS + piece.durationS);
        if (end > begin) parts.push({ fromS: begin, toS: end });
      }
    }
    return parts;
  }
  return { periodS, turnsAt, speedAt, monotoneParts };
}

function toPieces(spec: MotionSpec): Piece[] {
  const pieces: Piece[] = [];
  let beginS = 0;
  let turns = 0;
  let from = spec.startRpm / 60;
  function add(durationS: number, to: number, smooth: boolean) {
    const piece = { beginS, durationS, from, to, smooth, turns };
    pieces.push(piece);
    turns += pieceTurns(piece, durationS);
    beginS += durationS;
    from = to;
  }
  for (const segment of spec.segments) {
    if (!(segment.durationS > 0)) throw new Error('a segment needs a duration above 0');
    const to = segment.toRpm / 60;
    const smooth = segment.shape === 'smooth';
    if (from * to < 0) {
      if (smooth) throw new Error('a smooth segment may not change sign; give it a segment to 0 first');
      const share = from / (from - to);
      add(segment.durationS * share, 0, false);
      add(segment.durationS * (1 - share), to, false);
    } else add(segment.durationS, to, smooth);
  }
  return pieces;
}

function pieceTurns(p: Piece, x: number): number {
  const change = p.to - p.from;
  if (change === 0) return p.from * x;
  if (!p.smooth) return p.from * x + (change * x * x) / (2 * p.durationS);
  return p.from * x + 0.5 * change * (x - (p.durationS / Math.PI) * Math.sin((Math.PI * x) / p.durationS));
}

function pieceSpeed(p: Piece, x: number): number {
  const change = p.to - p.from;
  if (!p.smooth) return p.from + (change * x) / p.durationS;
  return p.from + 0.5 * change * (1 - Math.cos((Math.PI * x) / p.durationS));
}
