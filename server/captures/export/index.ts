/** The whole capture as a file. */
import type { CaptureRecord, CaptureStore } from '@/db';
import type { Result } from '@/signal/model';
import { csvTable } from './csv';
import { cborSequence, jsonLines } from './messages';
import { wavFile, wavKindOf } from './wav';

export type ExportFormat = 'csv' | 'json' | 'cbor' | 'wav';
export type ExportFile = {
  contentType: string;
  extension: string;
  parts: AsyncGenerator<string | Uint8Array>;
};

export const exportTypes: Record<ExportFormat, string> = {
  csv: 'text/csv; charset=utf-8; header=present',
  json: 'application/x-ndjson',
  cbor: 'application/cbor-seq',
  wav: 'audio/wav',
};

/** The reason, in words, where the format cannot hold it. */
export async function exportFile(
  store: CaptureStore,
  capture: CaptureRecord,
  format: ExportFormat,
): Promise<Result<ExportFile, string>> {
  const contentType = exportTypes[format];
  if (format === 'csv')
    return { ok: true, value: { contentType, extension: 'csv', parts: csvTable(store, capture) } };
  if (format === 'json') {
    return { ok: true, value: { contentType, extension: 'jsonl', parts: jsonLines(store, capture) } };
  }
  if (format === 'cbor') {
    return { ok: true, value: { contentType, extension: 'cbor', parts: cborSequence(store, capture) } };
  }
  const kind = await wavKindOf(store, capture);
  if (!kind.ok) return kind;
  return { ok: true, value: { contentType, extension: 'wav', parts: wavFile(store, capture, kind.value) } };
}
