import type { SampleType } from '../sample-types';

export interface CaptureChunkTable {
  capture_row: number;
  /** Place in `capture.channels`. */
  channel: number;
  start_index: number;
  count: number;
  sample_type: SampleType;
  codec: number;
  /** Minima, then maxima, in the sample type: one pair for each 4096, 512, 64 samples of the capture's axis. */
  coarse: Uint8Array;
  middle: Uint8Array;
  fine: Uint8Array;
  data: Uint8Array;
}
