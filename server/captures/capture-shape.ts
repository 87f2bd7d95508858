/** A capture as the API shows it: without what only the hub needs to know. */
import type { CaptureRecord } from '@/db';
import type { Capture } from '@/server/contract';

export function captureOf(record: CaptureRecord): Capture {
  const { id, rigId, title, tags, note, stream, startedAt, durationS, rateHz, createdAt, createdBy } = record;
  const { settings, rig, channels, findings } = record;
  return {
    id,
    rigId,
    title,
    tags,
    note,
    stream,
    startedAt,
    durationS,
    rateHz,
    createdAt,
    createdBy,
    settings,
    rig,
    channels,
    findings,
  };
}
