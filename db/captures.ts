import { readColumns } from './capture-store/columns';
import type { Columns, ColumnsQuery } from './capture-store/columns';
import type { CaptureGap } from './capture-store/capture-gaps';
import type { Piece } from './capture-store/chunk-cutter';
import { keepCapture } from './capture-store/keep';
import type { KeepInput } from './capture-store/keep';
import { readCaptureGaps, readChunks } from './capture-store/read-chunks';
import type { ReadRange } from './capture-store/read-chunks';
import type { CaptureRecord } from './queries/captures';
import type { TurnmarkDb } from './schema';

export type { Columns, ColumnsQuery, Scaling } from './capture-store/columns';
export type { CaptureGap } from './capture-store/capture-gaps';
export type { Piece } from './capture-store/chunk-cutter';
export type { CaptureMeta, KeepInput } from './capture-store/keep';
export type { ReadRange } from './capture-store/read-chunks';

/** The samples of captures. Their words (title, tags, note) are in `queries/captures`. */
export type CaptureStore = {
  /** See `keepCapture`. null: the source held no sample. */
  keep(input: KeepInput): Promise<CaptureRecord | null>;
  /** See `readChunks`. */
  readChunks(captureId: string, channels: readonly string[], range: ReadRange): AsyncIterable<Piece>;
  /** See `readColumns`. null: no such capture. */
  columns(captureId: string, query: ColumnsQuery): Promise<Columns | null>;
  /** In order, on the capture's axis. */
  gaps(captureId: string): Promise<CaptureGap[]>;
};

export function createCaptureStore(db: TurnmarkDb): CaptureStore {
  return {
    keep: (input) => keepCapture(db, input),
    readChunks: (captureId, channels, range) => readChunks(db, captureId, channels, range),
    columns: (captureId, query) => readColumns(db, captureId, query),
    gaps: (captureId) => readCaptureGaps(db, captureId),
  };
}
