/** Writes a run as CSV (RFC 4180: `t` and volts a channel) with the truth beside it as JSON. */
import { once } from 'node:events';
import { createWriteStream } from 'node:fs';
import { writeFile } from 'node:fs/promises';
import type { Rig } from '@/simulator/rig-model';

export async function writeRecording(
  rig: Rig,
  path: string,
  span: { fromS: number; seconds: number },
): Promise<{ rows: number; truthPath: string }> {
  const { rateHz } = rig.spec;
  const first = Math.round(span.fromS * rateHz);
  const rows = Math.round(span.seconds * rateHz);
  const out = createWriteStream(path);
  // `once` rejects on a write error (no such folder, disk full), which ends the run with that sentence.
  await once(out, 'open');
  out.write(`t,${rig.channels.join(',')}\r\n`);
  for (let at = 0; at < rows; at += 4096) {
    if (!out.write(linesOf(rig, first, at, Math.min(4096, rows - at)))) await once(out, 'drain');
  }
  out.end();
  await once(out, 'close');
  const truthPath = `${path}.truth.json`;
  await writeFile(truthPath, `${JSON.stringify(truthOf(rig, first, rows), null, 1)}\n`);
  return { rows, truthPath };
}

function linesOf(rig: Rig, first: number, at: number, count: number): string {
  const { rateHz, adc } = rig.spec;
  const arrays = rig.block(first + at, count);
  let text = '';
  for (let i = 0; i < count; i += 1) {
    text += ((at + i) / rateHz).toFixed(7);
    for (const array of arrays) {
      const value = array[i] as number;
      text += `,${(adc.kind === 'codes' ? (value - adc.codeOffset) * adc.voltsPerCode : value).toFixed(6)}`;
    }
    text += '\r\n';
  }
  return text;
}

/** Times are those of the recording: 0 at its first row, on the board's own clock. */
function truthOf(rig: Rig, first: number, rows: number) {
  const { spec, truth } = rig;
  const fromS = rig.timeOf(first);
  const toS = rig.timeOf(first + rows);
  const boardS = (tS: number) => (tS - fromS) * (1 + (spec.clockPpm ?? 0) * 1e-6);
  const steps = Math.max(1, Math.round((toS - fromS) / 0.01));
  return {
    rateHz: spec.rateHz,
    positions: spec.wheel.positions,
    missing: spec.wheel.missing ?? [],
    turns: truth.turnsAt(toS) - truth.turnsAt(fromS),
    speed: Array.from({ length: steps + 1 }, (_, i) => {
      const tS = fromS + ((toS - fromS) * i) / steps;
      return { t: boardS(tS), rpm: truth.speedRpmAt(tS), turns: truth.turnsAt(tS) - truth.turnsAt(fromS) };
    }),
    channels: Object.fromEntries(
      spec.channels.map(({ name, placeDeg }) => [
        name,
        truth.toothTimes(fromS, toS, placeDeg / 360 / spec.wheel.positions).map((pass) => ({
          t: boardS(pass.tS),
          position: pass.position,
          rising: pass.rising,
          direction: pass.direction,
        })),
      ]),
    ),
    faults: spec.faults.map((fault) => ({ ...fault, endS: Number.isFinite(fault.endS) ? fault.endS : null })),
    loopS: spec.loopS ?? null,
    fromS,
  };
}
