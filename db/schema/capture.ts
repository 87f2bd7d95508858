import type { FindingCode } from '@/signal/model';
import type { Generated } from 'kysely';

export interface CaptureTable {
  row: Generated<number>;
  id: string;
  rig_id: string;
  /** 0 while the chunks are being written. */
  kept: 0 | 1;
  title: string;
  note: string;
  stream: string;
  started_at_ms: number;
  rate_hz: number;
  /** Lost samples included. */
  length_samples: number;
  /** JSON, names in the order of the rig. */
  channels: string;
  created_at_ms: number;
  created_by: string;
  created_by_id: string | null;
  /** JSON of a settings version. */
  settings: string;
  /** JSON of a rig. */
  rig: string;
}

export interface CaptureTagTable {
  capture_row: number;
  place: number;
  tag: string;
}

export interface CaptureFindingTable {
  capture_row: number;
  place: number;
  code: FindingCode;
  severity: 'note' | 'warn' | 'fault';
  count: number;
}

export interface CaptureGapTable {
  capture_row: number;
  from_index: number;
  lost_samples: number;
  estimated: 0 | 1;
}

/** Full-text index; `rowid` is `capture.row`. */
export interface CaptureTextTable {
  rowid: number;
  title: string;
  note: string;
  tags: string;
  rig_name: string;
}
