import { bytesPerSample, holdsCodes, samplesAt, sampleTypeOf } from '../sample-types';
import type { SampleType } from '../sample-types';
import type { TurnmarkDb } from '../schema';
import { chunkSamples } from './chunk-cutter';
import { levels } from './pyramid';
import type { LevelName } from './pyramid';
import { findChannels, readChunks } from './read-chunks';
import type { SampleArray } from '@/signal/model';

/** volts = (code - codeOffset) * voltsPerCode; samples that came as volts stay as they are. */
export type Scaling = { voltsPerCode: number; codeOffset: number };
export type ColumnsQuery = {
  channel: string;
  fromIndex: number;
  /** Exclusive. */
  toIndex: number;
  /** At most so many columns. */
  points: number;
  scaling: Scaling;
};

/**
 * Volts; NaN where a column holds no sample. `raw`: sample by sample from `fromIndex`. `minmax`: column k covers
 * `stepSamples` samples from `fromIndex + k * stepSamples`, all of them, and `fromIndex` is a multiple of
 * `stepSamples` at or before the one asked for: columns stay the same while a picture is moved.
 */
export type Columns =
  | { kind: 'raw'; fromIndex: number; stepSamples: 1; v: Float64Array }
  | { kind: 'minmax'; fromIndex: number; stepSamples: number; min: Float64Array; max: Float64Array };

/** What to read for so many columns: the samples themselves, or a level of the pyramid. */
export type ColumnPlan = {
  fromIndex: number;
  stepSamples: number;
  columns: number;
  level: LevelName | null;
};

/** Whole columns over the range, from the coarsest level that still has at least four entries a column. */
export function planColumns(fromIndex: number, toIndex: number, points: number): ColumnPlan {
  const wide = (toIndex - fromIndex) / points;
  const level = (['coarse', 'middle', 'fine'] as const).find((name) => 4 * levels[name] <= wide) ?? null;
  const unit = level === null ? 1 : levels[level];
  // Whole columns may begin before the range: widen them until they fit, at the latest when one reaches from 0.
  for (let stepSamples = unit * Math.max(1, Math.ceil(wide / unit)); ; stepSamples += unit) {
    const from = Math.floor(fromIndex / stepSamples) * stepSamples;
    const columns = Math.ceil((toIndex - from) / stepSamples);
    if (columns <= points) return { fromIndex: from, stepSamples, columns, level };
  }
}

/** null: no such capture. Throws for a channel that it does not have, or fewer points than 1. */
export async function readColumns(
  db: TurnmarkDb,
  captureId: string,
  query: ColumnsQuery,
): Promise<Columns | null> {
  if (!(query.points >= 1)) throw new RangeError(`readColumns: points is ${query.points}, wanted 1 or more`);
  const found = await findChannels(db, captureId, [query.channel]);
  if (found === null) return null;
  const fromIndex = Math.min(found.lengthSamples, Math.max(0, Math.floor(query.fromIndex)));
  const toIndex = Math.min(found.lengthSamples, Math.max(fromIndex, Math.ceil(query.toIndex)));
  const points = Math.floor(query.points);
  if (toIndex - fromIndex <= points) {
    const v = new Float64Array(toIndex - fromIndex).fill(NaN);
    for await (const piece of readChunks(db, captureId, [query.channel], { fromIndex, toIndex })) {
      const { samples } = piece.channels[0]!;
      const { gain, offset } = scalingFor(sampleTypeOf(samples), query.scaling);
      const at = piece.startIndex - fromIndex;
      for (let i = 0; i < samples.length; i++) v[at + i] = (samples[i]! - offset) * gain;
    }
    return { kind: 'raw', fromIndex, stepSamples: 1, v };
  }

  const plan = planColumns(fromIndex, toIndex, points);
  const columns = new MinMaxColumns(plan, query.scaling);
  const end = Math.min(found.lengthSamples, plan.fromIndex + plan.columns * plan.stepSamples);
  if (plan.level === null) {
    const range = { fromIndex: plan.fromIndex, toIndex: end };
    for await (const piece of readChunks(db, captureId, [query.channel], range)) {
      const { samples } = piece.channels[0]!;
      columns.add(samples, samples, piece.startIndex, 1);
    }
  } else {
    const place = found.places[0]!;
    for (const row of await levelRows(db, found.row, place, plan.level, plan.fromIndex, end)) {
      const level = levels[plan.level];
      const entries = row.entries.length / 2;
      const start = Math.floor(row.startIndex / level) * level;
      columns.add(row.entries.subarray(0, entries), row.entries.subarray(entries), start, level);
    }
  }
  return columns.done();
}

async function levelRows(
  db: TurnmarkDb,
  captureRow: number,
  channel: number,
  level: LevelName,
  fromIndex: number,
  toIndex: number,
): Promise<{ startIndex: number; entries: SampleArray }[]> {
  const rows = await db
    .selectFrom('capture_chunk')
    .select(['start_index', 'sample_type', `${level} as level`])
    .where('capture_row', '=', captureRow)
    .where('channel', '=', channel)
    // A chunk that holds the first sample begins within one chunk's length before it.
    .where('start_index', '>', fromIndex - chunkSamples)
    .where('start_index', '<', toIndex)
    .orderBy('start_index')
    .execute();
  return rows.map((row) => ({
    startIndex: row.start_index,
    entries: samplesAt(row.level, 0, row.sample_type, row.level.byteLength / bytesPerSample(row.sample_type)),
  }));
}

function scalingFor(type: SampleType, scaling: Scaling): { gain: number; offset: number } {
  return holdsCodes(type)
    ? { gain: scaling.voltsPerCode, offset: scaling.codeOffset }
    : { gain: 1, offset: 0 };
}

/** Gathers entries (or samples, as entries of one) into columns. */
class MinMaxColumns {
  readonly #min: Float64Array;
  readonly #max: Float64Array;

  constructor(
    private readonly plan: ColumnPlan,
    private readonly scaling: Scaling,
  ) {
    this.#min = new Float64Array(plan.columns).fill(NaN);
    this.#max = new Float64Array(plan.columns).fill(NaN);
  }

  /** Entry k covers samples from `startIndex + k * level`; entries outside the columns are left out. */
  add(minima: SampleArray, maxima: SampleArray, startIndex: number, level: number): void {
    const { fromIndex, stepSamples, columns } = this.plan;
    const { gain, offset } = scalingFor(sampleTypeOf(minima), this.scaling);
    const lows = gain < 0 ? maxima : minima;
    const highs = gain < 0 ? minima : maxima;
    for (let k = 0; k < minima.length; k++) {
      const column = Math.floor((startIndex + k * level - fromIndex) / stepSamples);
      if (column < 0 || column >= columns) continue;
      const low = (lows[k]! - offset) * gain;
      const high = (highs[k]! - offset) * gain;
      // Written so that NaN, the empty column, gives way.
      if (!(this.#min[column]! <= low)) this.#min[column] = low;
      if (!(this.#max[column]! >= high)) this.#max[column] = high;
    }
  }

  done(): Columns {
    const { fromIndex, stepSamples } = this.plan;
    return { kind: 'minmax', fromIndex, stepSamples, min: this.#min, max: this.#max };
  }
}
