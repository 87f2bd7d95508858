import type { WheelFace } from '@/signal/model';

export type WheelMark = {
  index: number;
  angleDeg: number;
  kind: 'tooth' | 'missing' | 'unseen';
  /** From the centre, px. */
  inner: number;
  outer: number;
};

export type WheelDrawing = {
  marks: WheelMark[];
  ring: number;
  /** Spacing errors are drawn so many times as large as they are. */
  scale: number;
  /** Open arcs of the ring: [from, to] degrees. */
  arcs: [fromDeg: number, toDeg: number][];
};

const scales = [1, 2, 5, 10, 20, 50, 100, 200, 500, 1000];

/**
 * A mark a position: as long as its swing is strong beside the strongest, moved outward by its spacing error as an arc
 * length times `scale`. The ring is open where teeth are missing. `radius` is all there is, px.
 */
export function wheelDrawing(face: WheelFace, radius: number): WheelDrawing {
  const ring = radius * 0.68;
  const longest = radius * 0.2;
  const swing = Math.max(...face.positions.map((p) => p.swingV ?? 0), 1e-9);
  const room = radius * 0.08;
  const worstDeg = Math.max(...face.positions.map((p) => Math.abs(p.spacingErrorDeg ?? 0)), 0);
  const arcOf = (deg: number) => ((deg * Math.PI) / 180) * ring;
  const scale = scales.filter((s) => arcOf(worstDeg) * s <= room).at(-1) ?? 1;
  const marks = face.positions.map((p, index): WheelMark => {
    const inner = ring + room / 2 + Math.max(-room, Math.min(room, arcOf(p.spacingErrorDeg ?? 0) * scale));
    const kind = p.missing ? 'missing' : p.swingV === null ? 'unseen' : 'tooth';
    const length = kind === 'tooth' ? Math.max(3, (longest * p.swingV!) / swing) : 0;
    return { index, angleDeg: p.angleDeg, kind, inner, outer: inner + length };
  });
  return { marks, ring, scale: worstDeg === 0 ? 1 : scale, arcs: openArcs(face) };
}

function openArcs(face: WheelFace): [number, number][] {
  const count = face.positions.length;
  const missing = face.positions.filter((p) => p.missing);
  if (missing.length === 0 || missing.length === count) return missing.length === 0 ? [[0, 360]] : [];
  const half = 180 / count;
  const arcs: [number, number][] = [];
  // Starts right after a missing position, so that no arc runs over the end of the list.
  const start = face.positions.findIndex(
    (p, i) => !p.missing && face.positions[(i + count - 1) % count]!.missing,
  );
  for (let k = 0; k < count; k++) {
    const p = face.positions[(start + k) % count]!;
    if (p.missing) continue;
    const last = arcs.at(-1);
    const from = p.angleDeg - half;
    const joins = last && Math.abs(((from - last[1] + 540) % 360) - 180) < half * 0.5;
    if (joins) last[1] += 2 * half;
    else arcs.push([from, from + 2 * half]);
  }
  return arcs;
}

/** A point at an angle of the wheel: 0 at the top, growing clockwise, px. */
export function polar(centre: number, radius: number, angleDeg: number): { x: number; y: number } {
  const a = ((angleDeg - 90) * Math.PI) / 180;
  return { x: centre + radius * Math.cos(a), y: centre + radius * Math.sin(a) };
}

/** An arc of a circle as a path; a whole turn as two halves. */
export function arcPath(centre: number, radius: number, fromDeg: number, toDeg: number): string {
  const sweep = toDeg - fromDeg;
  if (Math.abs(sweep) >= 359.999) {
    return `${arcPath(centre, radius, fromDeg, fromDeg + 180)}${arcPath(centre, radius, fromDeg + 180, fromDeg + 359.99)}`;
  }
  const a = polar(centre, radius, fromDeg);
  const b = polar(centre, radius, toDeg);
  const r = radius.toFixed(2);
  const flags = `${Math.abs(sweep) > 180 ? 1 : 0} ${sweep > 0 ? 1 : 0}`;
  return `M${a.x.toFixed(2)} ${a.y.toFixed(2)}A${r} ${r} 0 ${flags} ${b.x.toFixed(2)} ${b.y.toFixed(2)}`;
}

/** Faster than this the eye cannot follow the mark: a blurred arc and words instead, turns of the shaft a second. */
export const followsUpToTurnsPerS = 2;

/** What the turn mark does now, in words. */
export function turnWords(rpm: number | null, angleDeg: number | null): string {
  if (rpm === null) return angleDeg === null ? 'angle unknown' : `at ${Math.round(angleDeg)}°`;
  const turnsPerS = Math.abs(rpm) / 60;
  if (turnsPerS > followsUpToTurnsPerS)
    return `${turnsPerS >= 10 ? turnsPerS.toFixed(0) : turnsPerS.toFixed(1)} turns a second`;
  return angleDeg === null ? 'angle unknown' : `at ${Math.round(((angleDeg % 360) + 360) % 360)}°`;
}
