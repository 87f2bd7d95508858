export type WheelMark = { position: number; sin: number; cos: number; missing: boolean };

/** More marks than this run into each other in a drawing of a hand's breadth. */
export const mostMarks = 120;

/**
 * Where the teeth of a wheel stand, clockwise from the top; the missing ones last, so that the gap ends at the top.
 * A finer wheel is thinned to every nth position.
 */
export function wheelMarks(
  pulsesPerTurn: number,
  missingPulses: number,
): { marks: WheelMark[]; everyNth: number } {
  const everyNth = Math.max(1, Math.ceil(pulsesPerTurn / mostMarks));
  const firstMissing = pulsesPerTurn - missingPulses;
  const marks: WheelMark[] = [];
  for (let position = 0; position < pulsesPerTurn; position += everyNth) {
    const angle = (2 * Math.PI * position) / pulsesPerTurn;
    const missing = position >= firstMissing;
    marks.push({ position, sin: Math.sin(angle), cos: Math.cos(angle), missing });
  }
  return { marks, everyNth };
}
