/**
 * Where the levels of a band come from: a hunt at the start, of which the signal is remembered so that its edges are found
 * afterwards, and a hunt beside the old band where nothing has come for long. A fixed band stays; what the hunt finds
 * beside it is told for the margin.
 */
import { forgetState, keepState, stateOf, zones } from '@/signal/detector-state';
import type { Detector } from '@/signal/detector-state';
import { createHunter, hunt, startHunt, swingFloorV } from '@/signal/hunter';
import type { Levels } from '@/signal/levels';
import type { Past } from '@/signal/past';
import { Remembered } from '@/signal/remembered';
import { leastToothV } from '@/signal/tooth-size';

/** Whom the finder works for. */
export type FinderHost = {
  /** As of the last tick, V; NaN: not known. */
  readonly noiseV: number;
  /** What it may be at most, as far as can be told, V; NaN: not known. */
  readonly mostNoiseV: number;
  readonly quantumV: number;
  /** The band stays where it is. */
  readonly isFixed: boolean;
  /** The shaft may turn to and fro. */
  readonly isRing: boolean;
  /** While no levels are known, smaller swings are no teeth, V. */
  readonly leastFirstV: number;
  readonly edgeCount: number;
  readonly lastEdgeAt: number;
  /** The usual interval between teeth; NaN: not known. */
  readonly typicalSamples: number;
  /** Runs the band over `v[from..to]` and takes what edges it makes. @returns the first index not scanned. */
  scan(v: Float64Array, from: number, to: number, base: number, past: Past | null): number;
  /** New levels were found: thresholds are to be set from them, and from what is remembered, as of sample `at`. */
  adopt(at: number, remembered: Remembered | null): void;
  /** A fixed band makes nothing of a swing between these, V. */
  notCounted(lowV: number, highV: number): void;
  /** Edges that passed since the last one may still be made, now that sample `at` has come. */
  mayFindLate(at: number): boolean;
  /** So long without an edge, and the levels are looked at again, samples. */
  quietSamples(): number;
};

const quietS = 1;
/** So many turning points that come at another pace than the teeth did are not believed: the shaft stopped in between. */
const refusals = 400;
const leastPace = 0.6;
const mostPace = 1.5;
/** Samples by which remembering begins before the last edge is out of reach. */
const spare = 8;

export class LevelFinder {
  /** Edges of what was remembered are being found. */
  replaying = false;
  private hunting = false;
  private starting = false;
  private huntAt = Infinity;
  private refused = 0;
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

  /** `run` is to be called instead of the band's own scan. */
  get isBusy(): boolean {
    return this.hunting || this.remembered !== null;
  }

  /** Sample up to which nothing is left to be found; NaN where nothing is being remembered that must come first. */
  get decidedUpTo(): number {
    return this.starting && this.remembered ? this.remembered.base : NaN;
  }

  /** Nothing is known: the hunt begins with sample `at`. */
  startFromNothing(at: number): void {
    this.hunting = this.starting = true;
    this.remembered = this.host.isFixed ? null : new Remembered(this.rateHz, at - 1);
    startHunt(this.hunter, this.leastSwingV(), this.levels, this.host.isRing);
  }

  /** Samples were lost: `at` is the next one. */
  gap(at: number): void {
    if (Number.isNaN(this.levels.lowV)) {
      this.startFromNothing(at);
      return;
    }
    this.hunting = false;
    this.remembered = null;
    this.waitFrom(at, 2 * this.rateHz, Infinity);
  }

  /** An edge was taken: from here on it is waited for the next one. */
  wait(past: Past | null): void {
    if (this.replaying) this.detector.pauseAt = Infinity;
    else this.waitFrom(this.host.lastEdgeAt, this.host.quietSamples(), past ? past.reach : Infinity);
  }

  private waitFrom(at: number, quiet: number, reach: number): void {
    this.huntAt = Math.ceil(at + quiet);
    this.detector.pauseAt = Math.min(this.huntAt, Math.ceil(at + reach) - spare);
  }

  /** The band's scan has paused before sample `at`: the next edge is long in coming. */
  pause(at: number, past: Past | null): void {
    const from = Math.floor(this.host.lastEdgeAt) + 1;
    if (past && !this.host.isFixed && from >= past.from && at - from < past.reach) {
      this.remembered = new Remembered(this.rateHz, from - 1);
      if (!this.remembered.keep(past.v, from - past.base, at - 1 - past.base)) this.remembered = null;
    }
    this.detector.pauseAt = this.huntAt;
    if (at >= this.huntAt) this.startAgain();
  }

  private startAgain(): void {
    this.hunting = true;
    this.refused = 0;
    startHunt(this.hunter, this.leastSwingV(), this.levels, this.host.isRing);
  }

  /** What is small beside the teeth, or beside a band as typed, is none. */
  private leastSwingV(): number {
    const { levels, detector, host } = this;
    const ofTeeth = leastToothV(levels.highV - levels.lowV, host.noiseV) || host.leastFirstV;
    return host.isFixed ? Math.max(ofTeeth, (detector.operateV - detector.releaseV) / 2) : ofTeeth;
  }

  /** Where nothing has swung yet for a second, no edge can be found there later: what was remembered of it may go. */
  forgetQuiet(nextAt: number): void {
    const { hunter, remembered, host } = this;
    if (!remembered || !this.starting || remembered.count < quietS * this.rateHz || hunter.turnCount > 0)
      return;
    if (hunter.highV - hunter.lowV <= swingFloorV(hunter, host.mostNoiseV, host.quantumV))
      remembered.restart(nextAt - 1);
  }

  /**
   * Takes `v[from..to]`: hunts, remembers, and runs the old band where there is one; an edge of it ends both.
   * @returns the first index not taken.
   */
  run(v: Float64Array, from: number, to: number, base: number, past: Past | null): number {
    const { hunter, detector, host } = this;
    let stop = to;
    if (this.hunting) {
      stop = hunt(hunter, v, from, to, host.mostNoiseV, host.quantumV);
    } else {
      stop = Math.min(to, this.huntAt - base - 1);
      if (stop < from) {
        this.startAgain();
        return from;
      }
    }
    if (this.remembered && !this.remembered.keep(v, from, stop)) this.remembered = null;
    if (!Number.isNaN(detector.operateV)) {
      const { edgeCount } = host;
      detector.pauseAt = Infinity;
      const next = host.scan(v, from, stop, base, this.remembered ?? past);
      if (host.edgeCount > edgeCount) {
        this.hunting = this.starting = false;
        this.remembered = null;
        return next;
      }
    }
    if (this.hunting && hunter.found && this.isBelieved(base + stop)) this.adopt(v, stop, base);
    if (!this.isBusy) detector.pauseAt = this.huntAt;
    return stop + 1;
  }

  /** A swing that lost much of its size at once goes on at the teeth's pace; a shaft that came to rest and shakes has its own. */
  private isBelieved(at: number): boolean {
    const { hunter, host } = this;
    if (!hunter.aside || !host.isRing || this.refused >= refusals) return true;
    const pace = (at - host.lastEdgeAt) / (hunter.turnCount / 2) / host.typicalSamples;
    if (pace >= leastPace && pace <= mostPace) return true;
    this.refused++;
    // Until the next turning point: how often this is asked depends on how the stream is cut.
    hunter.found = false;
    return false;
  }

  private adopt(v: Float64Array, at: number, base: number): void {
    const { hunter, detector, levels, host, remembered, starting } = this;
    if (host.isFixed) {
      host.notCounted(hunter.foundLowV, hunter.foundHighV);
      startHunt(hunter, this.leastSwingV(), levels, false);
      return;
    }
    this.hunting = this.starting = false;
    this.remembered = null;
    levels.lowV = hunter.foundLowV;
    levels.highV = hunter.foundHighV;
    // Nothing is known of the flanks yet: begin wide, and let whole teeth narrow it.
    levels.wobbleV = (levels.highV - levels.lowV) / 4;
    const state = host.isRing ? stateOf(detector) : 0;
    forgetState(detector);
    if (remembered && (starting || host.mayFindLate(base + at))) {
      host.adopt(remembered.base + 1, remembered);
      this.replaying = true;
      detector.pauseAt = Infinity;
      for (let j = 1; j <= remembered.count;)
        j = host.scan(remembered.v, j, remembered.count, remembered.base, remembered);
      this.replaying = false;
    } else {
      host.adopt(base + at, remembered);
      if (state === 0) this.placeState(v[at]!);
      else this.carryState(v[at]!, state > 0);
    }
    this.waitFrom(base + at, host.quietSamples(), Infinity);
  }

  /** Another channel's edges count with this one's: a state that changed without an edge would lose a cycle. */
  private carryState(x: number, high: boolean): void {
    const { detector, levels } = this;
    detector.zone = high ? zones.high : zones.low;
    detector.extremeV = high ? Math.max(x, levels.highV) : Math.min(x, levels.lowV);
    keepState(detector, x);
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
