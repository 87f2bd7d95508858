/**
 * A fixed band stays as typed. Teeth that it does not count are looked for all the same, since the margin is about them;
 * what is needed for that is kept only where there is reason to, and for a moment once a second.
 */
import { BandKeeper } from '@/signal/band-keeper';
import type { BandOptions } from '@/signal/band-keeper';
import type { Band } from '@/signal/model';
import { History } from '@/signal/past';
import { edgeRising } from '@/signal/pipeline-types';
import { longShare } from '@/signal/weak-teeth';

/** Turns for which stretches are looked through after one had a tooth that was not counted. */
const watchedTurns = 4;
const fewestEdges = 16;
const ticksBetweenAudits = 10;
const edgesOfAudit = 3;
/** Without an edge for so long, it is looked whether there are teeth beside the band. */
const quietS = 1;

export class FixedBand extends BandKeeper {
  readonly isFixed = true;
  private readonly history: History;
  private isWatching = false;
  /** Edges up to this number are preceded by a look back. */
  private watchedTo = 0;
  private auditAt = 0;
  private ticks = 0;
  /** First sample after the last tick; and so late after the one before an edge is late, as of then. */
  private tickAt = 0;
  private lateSamples = NaN;
  // The chunk that is being scanned.
  private chunk: Float64Array = new Float64Array(1);
  private chunkFrom = 0;
  private chunkTo = 0;
  private chunkBase = 0;

  constructor(options: BandOptions<Extract<Band, { mode: 'fixed' }>>) {
    super(options);
    const { band, channelName, startIndex, rateHz } = options;
    const { operateV, releaseV } = band.channels?.[channelName] ?? band;
    this.history = new History(rateHz, options.chunk, startIndex);
    this.moveBand(operateV, releaseV, startIndex / rateHz);
    this.finder.startFromNothing(startIndex);
  }

  run(v: Float64Array, from: number, to: number, base: number): void {
    const { detector, finder } = this;
    this.chunk = v;
    this.chunkFrom = from;
    this.chunkTo = to;
    this.chunkBase = base;
    if (this.edgeCount > this.watchedTo) this.isWatching = false;
    if (this.isWatching) this.history.take(v, from, to, base + from);
    let j = from;
    while (j <= to) {
      if (finder.isBusy) {
        j = finder.run(v, j, to, base, this.isWatching ? this.history : null);
      } else {
        j = this.scan(v, j, to, base, this.isWatching ? this.history : null);
        if (j <= to && base + j >= detector.pauseAt) finder.pause(base + j, null);
      }
    }
  }

  override gap(at: number): void {
    super.gap(at);
    this.isWatching = false;
  }

  override tick(nextAt: number, noiseV: number, mostNoiseV: number, quantumV: number): void {
    super.tick(nextAt, noiseV, mostNoiseV, quantumV);
    this.tickAt = nextAt;
    this.lateSamples = longShare * this.intake.typicalSamples;
    if (++this.ticks % ticksBetweenAudits === 0) this.watchTo(this.edgeCount + edgesOfAudit, nextAt);
  }

  override rejected(at: number): void {
    super.rejected(at);
    // Not from the crossing on, which may lie in a block that is gone.
    this.watchOn(this.detector.rejectedAt);
  }

  override toothMissed(): void {
    super.toothMissed();
    this.watchOn(this.tickAt);
  }

  quietSamples(): number {
    const { rateHz, missingPulses } = this.options;
    const teeth = 4 * (missingPulses + 1) * this.intake.periodSamples;
    return Math.max(quietS * rateHz, teeth || 0);
  }

  adopt(): void {
    // The band is as typed, whatever the levels.
  }

  protected takeEdges(): void {
    const { edges } = this.detector;
    const { intake, auditAt, watchedTo } = this;
    const isAuditDue = intake.edgeCount + edges.count > auditAt && intake.edgeCount < watchedTo;
    let taken = 0;
    for (let k = 0; k < edges.count; k++) {
      const same =
        k > 1 ? edges.midAt[k - 2]! : edges.flags[k]! & edgeRising ? intake.riseMidAt : intake.fallMidAt;
      const isLate = edges.midAt[k]! - same > this.lateSamples;
      if (!isAuditDue && !isLate) continue;
      // Whatever came before has to be known by then, wherever blocks end.
      if (k > taken) intake.take(this.noiseV, taken, k);
      taken = k;
      this.lookAt(k, isLate);
    }
    intake.take(this.noiseV, taken, edges.count);
    this.finder.wait(null);
  }

  /** Edge `k` that the detector holds, of which the ones before have been taken. */
  private lookAt(k: number, isLate: boolean): void {
    const { teethPerTurn } = this.options;
    const from = Math.ceil(this.detector.edges.at[k]!);
    const number = this.edgeCount;
    // As if the block had ended before it.
    if (number > this.watchedTo) this.isWatching = false;
    const isAudit = number >= this.auditAt && number < this.watchedTo && teethPerTurn > 1;
    if (isLate) this.watchOn(from);
    if (isAudit) this.auditAt = number + (Math.max(fewestEdges / 2, teethPerTurn) | 1);
    if (this.past === null || this.past === this.history) this.past = this.isWatching ? this.history : null;
    if (!(isLate || isAudit) || !this.look(k)) return;
    this.noteUncounted(k);
    this.watchOn(from);
  }

  private watchOn(from: number): void {
    const turn = 2 * this.options.teethPerTurn;
    this.watchTo(this.edgeCount + watchedTurns * Math.max(fewestEdges, turn), from);
  }

  /** @param from sample from which on stretches may be looked through, where none were before. */
  private watchTo(edge: number, from: number): void {
    if (edge > this.watchedTo) this.watchedTo = edge;
    if (this.isWatching) return;
    const { history, chunk, chunkFrom, chunkTo, chunkBase } = this;
    this.isWatching = true;
    history.from = from;
    if (from <= chunkBase + chunkTo) history.take(chunk, chunkFrom, chunkTo, chunkBase + chunkFrom);
  }
}
