/** A capture as the API shows it. */
import type { CaptureRecord } from '@/db';
import type { Capture } from '@/server/contract';

export function captureOf(record: CaptureRecord): Capture {
  const { lengthSamples: _length, createdById: _who, ...shown } = record;
  return shown;
}
