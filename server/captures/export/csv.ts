/** A capture as a table (RFC 4180): seconds and volts. Samples that were lost have no row. */
import type { CaptureRecord, CaptureStore } from '@/db';
import type { Channel, SampleArray } from '@/signal/model';
import { holdsCodes } from '@/signal/scale';
import { captureStretches } from '../stretches';
import { createTurns } from '../turns';

const rowsAtOnce = 2_048;

/** Nine digits tell any two codes or float32 values apart; a float64 is written whole. */
function voltText(array: SampleArray, { voltsPerCode, codeOffset }: Channel): (i: number) => string {
  if (array instanceof Float64Array) return (i) => String(array[i]!);
  if (!holdsCodes(array)) return (i) => String(Number(array[i]!.toPrecision(9)));
  return (i) => String(Number(((array[i]! - codeOffset) * voltsPerCode).toPrecision(9)));
}

export async function* csvTable(store: CaptureStore, capture: CaptureRecord): AsyncGenerator<string> {
  const { channels, rateHz, rig } = capture;
  const setups = channels.map((name) => rig.channels.find((c) => c.name === name)!);
  yield `t,${channels.join(',')}\r\n`;
  const turn = createTurns();
  for await (const stretch of captureStretches(store, capture, channels)) {
    if (stretch.kind === 'gap') continue;
    const texts = stretch.arrays.map((array, c) => voltText(array, setups[c]!));
    for (let from = 0; from < stretch.count; from += rowsAtOnce) {
      const to = Math.min(stretch.count, from + rowsAtOnce);
      let rows = '';
      for (let i = from; i < to; i++) {
        rows += String((stretch.startIndex + i) / rateHz);
        for (const text of texts) rows += `,${text(i)}`;
        rows += '\r\n';
      }
      yield rows;
      await turn();
    }
  }
}
