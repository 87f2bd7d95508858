/** Captures through the signal path: the same one as live, in slices, the last results kept. */
import { createHash } from 'node:crypto';
import { setCaptureFindings } from '@/db';
import type { CaptureFinding, CaptureRecord, CaptureStore, TurnmarkDb } from '@/db';
import type { Logger } from '@/server/logger';
import { setupOf, signalSettingsOf } from '@/server/rigs';
import { createAnalyser } from '@/signal/analysis';
import type { Analysis, Finding, Result, Settings, Wheel } from '@/signal/model';
import type { SetupIssue } from '@/signal/pipeline-types';
import { jsonSlices } from './json-slices';
import { captureStretches } from './stretches';
import { createTurns, WorkQueue } from './turns';

/** JSON of an `Analysis`, with the findings' summary. */
export type AnalysisResult = { json: Buffer; findings: CaptureFinding[] };

export type AnalysisWish = { settings: Settings; wheel: Wheel; zeroPhase?: boolean };

const maxCachedBytes = 64 * 1024 * 1024;
/** A capture with more samples than this is summed up after the answer. */
const awaitedSamples = 8_000_000;

const rank = { fault: 0, warn: 1, note: 2 } as const;

/** One row for each code, with its worst severity, the worst first. */
function summaryOf(findings: readonly Finding[]): CaptureFinding[] {
  const byCode = new Map<string, CaptureFinding>();
  for (const { code, severity } of findings) {
    const known = byCode.get(code);
    if (known === undefined) byCode.set(code, { code, severity, count: 1 });
    else {
      known.count += 1;
      if (rank[severity] < rank[known.severity]) known.severity = severity;
    }
  }
  return [...byCode.values()].sort((a, b) => rank[a.severity] - rank[b.severity] || b.count - a.count);
}

export class CaptureAnalyses {
  readonly #queue = new WorkQueue({ running: 2, waiting: 32 });
  readonly #running = new Map<string, Promise<Result<AnalysisResult, SetupIssue>>>();
  /** Oldest use first. */
  readonly #cache = new Map<string, AnalysisResult>();
  #cachedBytes = 0;

  constructor(private readonly deps: { db: TurnmarkDb; store: CaptureStore; log: Logger }) {}

  /** Too much is waiting already: say so rather than let it grow. */
  get busy(): boolean {
    return this.#queue.full;
  }

  async analyse(capture: CaptureRecord, wish: AnalysisWish): Promise<Result<AnalysisResult, SetupIssue>> {
    const digest = createHash('sha256').update(JSON.stringify(wish)).digest('base64url');
    const key = `${capture.id} ${digest}`;
    const cached = this.#cache.get(key);
    if (cached !== undefined) {
      this.#cache.delete(key);
      this.#cache.set(key, cached);
      return { ok: true, value: cached };
    }
    let running = this.#running.get(key);
    if (running === undefined) {
      running = this.#queue.run(() => this.#run(capture, wish, key)).finally(() => this.#running.delete(key));
      this.#running.set(key, running);
    }
    return running;
  }

  keptWish(capture: CaptureRecord): AnalysisWish {
    return { settings: signalSettingsOf(capture.settings), wheel: capture.rig.wheel };
  }

  /** Fills the summary of a fresh capture. Never fails: the capture is kept whatever the signal path makes of it. */
  async summarize(capture: CaptureRecord): Promise<CaptureRecord> {
    const summed = this.#summarize(capture);
    return capture.lengthSamples * capture.channels.length > awaitedSamples ? capture : summed;
  }

  forget(captureId: string): void {
    for (const key of [...this.#cache.keys()]) if (key.startsWith(`${captureId} `)) this.#drop(key);
  }

  async #summarize(capture: CaptureRecord): Promise<CaptureRecord> {
    try {
      const result = await this.analyse(capture, this.keptWish(capture));
      if (!result.ok) return capture;
      const { findings } = result.value;
      await setCaptureFindings(this.deps.db, capture.id, findings);
      return { ...capture, findings };
    } catch (error) {
      this.deps.log.error({ err: error, captureId: capture.id }, 'capture could not be summed up');
      return capture;
    }
  }

  async #run(
    capture: CaptureRecord,
    { settings, wheel, zeroPhase = false }: AnalysisWish,
    key: string,
  ): Promise<Result<AnalysisResult, SetupIssue>> {
    const { channels, rateHz } = capture;
    const rig = { ...setupOf(capture.rig), wheel };
    const made = createAnalyser({ rig, settings, rateHz, channels, zeroPhase });
    if (!made.ok) return made;
    const turn = createTurns();
    for await (const stretch of captureStretches(this.deps.store, capture, channels)) {
      if (stretch.kind === 'gap') made.value.gap(stretch.lostSamples, stretch.estimated);
      else made.value.push(stretch.arrays, stretch.count);
      await turn();
    }
    const analysis: Analysis = made.value.finish();
    const parts: Buffer[] = [];
    for (const slice of jsonSlices(analysis)) {
      parts.push(Buffer.from(slice));
      await turn();
    }
    const result = { json: Buffer.concat(parts), findings: summaryOf(analysis.findings) };
    this.#keep(key, result);
    return { ok: true, value: result };
  }

  #keep(key: string, result: AnalysisResult): void {
    if (result.json.byteLength > maxCachedBytes / 4) return;
    this.#cache.set(key, result);
    this.#cachedBytes += result.json.byteLength;
    for (const oldest of this.#cache.keys()) {
      if (this.#cachedBytes <= maxCachedBytes) break;
      this.#drop(oldest);
    }
  }

  #drop(key: string): void {
    this.#cachedBytes -= this.#cache.get(key)?.json.byteLength ?? 0;
    this.#cache.delete(key);
  }
}
