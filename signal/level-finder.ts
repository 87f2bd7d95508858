/**
 * Where the levels of a fitted band come from: a hunt at the start, of which the signal is remembered so that its edges
 * are found afterwards, and a hunt beside the old band where nothing has come for long.
 */
import { runDetector } from '@/signal/detector';
import { forgetState, zones } from '@/signal/detector-state';
import type { Detector, DetectorSink } from '@/signal/detector-state';
import { createHunter, hunt, startHunt, swingFloorV } from '@/signal/hunter';
import type { Levels } from '@/signal/levels';
import { Remembered } from '@/signal/remembered';

/** Whom the finder works for. */
export type FinderHost = DetectorSink & {
  /** As of the last tick, V; NaN: not known. */
  readonly noiseV: number;
  /** The detector holds edges: they are to be taken, and thresholds fitted anew. */
  takeEdges(): void;
  /** New levels: thresholds are to be set from them as of sample `at`. */
  fit(at: number): void;
  /** So long without an edge, and the levels are looked at again, samples. */
  quietSamples(): number;
};

const quietS = 1;

export class LevelFinder {
  hunting = false;
  /** Edges of what was remembered are being found. */
  replaying = false;
  private readonly hunter = createHunter();
  private readonly detector: Detector;
  private readonly levels: Levels;
  private readonly rateHz: number;
  private readonly host: FinderHost;
  private remembered: Remembered | null = null;

  constructor(detector: Detector, levels: Levels, rateHz: number, host: FinderHost) {
    this.detector = detector;
    this.levels = levels;
    this.rateHz = rateHz;
    this.host = host;
  }

  /** Sample up to which nothing is left to be found; NaN where nothing is being remembered. */
  get decidedUpTo(): number {
    return this.remembered ? this.remembered.base : NaN;
  }

  /** Nothing is known: the hunt begins with sample `at`. */
  startFromNothing(at: number): void {
    this.hunting = true;
    this.remembered = new Remembered(this.rateHz, at - 1);
    startHunt(this.hunter, at, 0);
  }

  /** Levels are known, but nothing has reached them for long. */
  startAgain(at: number): void {
    this.hunting = true;
    startHunt(this.hunter, at, (this.levels.highV - this.levels.lowV) / 4);
  }

  /** Samples were lost: `at` is the next one. */
  gap(at: number): void {
    if (Number.isNaN(this.levels.lowV)) {
      this.startFromNothing(at);
    } else {
      this.hunting = false;
      this.detector.pauseAt = at + 2 * this.rateHz;
    }
  }

  /** Where nothing has swung yet for a second, no edge can be found there later: what was remembered of it may go. */
  forgetQuiet(nextAt: number, quantumV: number): void {
    const { hunter, remembered } = this;
    if (!remembered || remembered.count < quietS * this.rateHz || hunter.turnCount > 0) return;
    if (hunter.highV - hunter.lowV <= swingFloorV(hunter, this.host.noiseV, quantumV))
      remembered.restart(nextAt - 1);
  }

  /**
   * Hunting over `v[from..to]` and, where levels are known, the old band side by side; an accepted edge ends the hunt.
   * @returns the first index not taken.
   */
  huntOn(v: Float64Array, from: number, to: number, base: number, quantumV: number): number {
    const { hunter, detector, host } = this;
    const patience = Math.max(64, 2 * this.rateHz);
    const stop = hunt(hunter, v, from, to, base, host.noiseV, quantumV, patience);
    const found = hunter.found;
    if (!Number.isNaN(detector.operateV)) {
      detector.pauseAt = Infinity;
      const next = runDetector(detector, v, from, stop, base, host);
      if (detector.edges.count > 0) {
        host.takeEdges();
        this.hunting = false;
        return next;
      }
    }
    if (this.remembered && !this.remembered.keep(v, from, stop)) this.remembered = null;
    if (found) this.adopt(v, stop, base);
    return stop + 1;
  }

  private adopt(v: Float64Array, at: number, base: number): void {
    const { hunter, detector, levels, host, remembered } = this;
    this.hunting = false;
    levels.lowV = hunter.foundLowV;
    levels.highV = hunter.foundHighV;
    // Nothing is known of the flanks yet: begin wide, and let whole teeth narrow it.
    levels.wobbleV = (levels.highV - levels.lowV) / 4;
    forgetState(detector);
    if (remembered) {
      host.fit(remembered.base + 1);
      this.replaying = true;
      detector.pauseAt = Infinity;
      for (let j = 1; j <= remembered.count;) {
        j = runDetector(detector, remembered.v, j, remembered.count, remembered.base, host);
        if (detector.edges.count > 0) host.takeEdges();
      }
      this.replaying = false;
      this.remembered = null;
    } else {
      host.fit(base + at);
      this.placeState(v[at]!);
    }
    detector.pauseAt = Math.ceil(base + at + host.quietSamples());
  }

  /** The hunter has seen on which side of the new band the signal was last. */
  private placeState(x: number): void {
    const { hunter, detector } = this;
    const low = x < detector.releaseV || (x <= detector.operateV && hunter.heading > 0);
    if (low) detector.zone = x > detector.midV ? zones.lowUp : zones.low;
    else detector.zone = x < detector.midV ? zones.highDown : zones.high;
    detector.extremeV = low ? Math.min(x, this.levels.lowV) : Math.max(x, this.levels.highV);
    detector.reachV = x;
  }
}
