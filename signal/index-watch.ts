/**
 * Counts a turn, held against an index pulse: between two of them exactly as many counts as the wheel makes must lie. Fewer
 * were lost, more are too many, and the same other number turn after turn is a wheel that is set up wrongly.
 *
 * An index often stands right beside an edge of the first channel, where a little jitter decides which of the two comes
 * first. Its place is therefore taken in parts of a count, by its instant between the teeth beside it; what lies between two
 * such places is a whole number but for that jitter. Where the jitter is a good part of a count, a turn is wrong only by more
 * than it can make, and what was overlooked so is not lost: the next turn is held against where the index should have been.
 *
 * Judged is only a turn in one direction, without a stop or lost samples within, and not the first one that the channel
 * shows, while its band still finds its place. An index channel may be found late and is not waited for: the teeth are
 * looked up in a ring of the last turns.
 */
import type { ChannelPath } from '@/signal/channel-path';
import type { IndexCounts } from '@/signal/index-counts';
import { IndexNumbering } from '@/signal/index-numbering';
import type { Motion } from '@/signal/motion';
import { readableFrom } from '@/signal/tooth-log';

export type IndexTurn = {
  verdict: 'exact' | 'lost' | 'extra';
  /** Counts that lay between the two index pulses, and those above (or below) what the wheel makes. */
  counted: number;
  excess: number;
  /** What the jitter of the index pulses can make, counts. */
  toleranceCounts: number;
  fromS: number;
  toS: number;
};

/** An index pulse so much earlier than the turn before lasted, and within so small a part of the counts, is bounce. */
const bounceShare = 0.3;
const bounceCounts = 0.25;
const meanShare = 1 / 16;
const sigmas = 3.5;
/** Index pulses of an unbroken row that are not judged by. */
const unproven = 1;

/** One index channel beside the channels that count; `tick` is asked at ticks, after the edges up to them are merged. */
export class IndexWatch {
  /** Counts a turn of the wheel: four (six) a pulse where a ring of states counts, one else. */
  readonly expected: number;
  /** The last turn that was judged. */
  lastTurn: IndexTurn | null = null;
  exactTurns = 0;
  lostTurns = 0;
  extraTurns = 0;
  lostCounts = 0;
  extraCounts = 0;
  bounces = 0;
  /** Mean of the last judged turns; NaN: none. Of the same wrong number turn after turn: how many in a row. */
  meanCounted = NaN;
  sameInRow = 0;
  /** End of the last turn that was not exact, s; NaN: none. */
  lastWrongS = NaN;
  /** Instant of the last index pulse, bounce left out, s; NaN: none. */
  lastIndexS = NaN;
  private readonly path: ChannelPath;
  private readonly motion: Motion;
  private readonly sampleS: number;
  private readonly countsOf: IndexCounts;
  private readonly numbering: IndexNumbering;
  private next = 0;
  /** Count at the last index pulse, or where it should have been; NaN: not known. */
  private placeAtIndex = NaN;
  private lastSigmaS = NaN;
  private turnS = NaN;

  /** Null where the rig has no index channel. @param primary the channel that speed comes from. */
  static of(
    path: ChannelPath | undefined,
    primary: ChannelPath | undefined,
    motion: Motion,
    rateHz: number,
  ): IndexWatch | null {
    const { indexCounts } = motion;
    return path && primary && indexCounts ? new IndexWatch(path, primary, motion, indexCounts, rateHz) : null;
  }

  private constructor(
    path: ChannelPath,
    primary: ChannelPath,
    motion: Motion,
    counts: IndexCounts,
    rateHz: number,
  ) {
    const { pulsesPerTurn, missingPulses } = motion.rig.wheel;
    this.path = path;
    this.motion = motion;
    this.countsOf = counts;
    this.sampleS = 1 / rateHz;
    this.numbering = new IndexNumbering(motion, primary.log, path.log);
    this.expected = (pulsesPerTurn - missingPulses) * (motion.tracker?.table.stepsPerCycle ?? 1);
  }

  /** Judged turns. */
  get turns(): number {
    return this.exactTurns + this.lostTurns + this.extraTurns;
  }

  /** Takes the index pulses that came since the last tick, as far as a tooth came after them. */
  tick(): void {
    const { log } = this.path;
    const from = readableFrom(log, this.next);
    if (from > this.next) this.next = from;
    const { teeth, mask, t } = this.countsOf;
    if (teeth === 0) return;
    const lastToothS = t[(teeth - 1) & mask]!;
    while (this.next < log.count && log.riseS[this.next & log.mask]! < lastToothS) this.take(this.next++);
    this.numbering.tick();
  }

  private take(n: number): void {
    const { log } = this.path;
    const indexS = log.riseS[n & log.mask]!;
    const place = this.placeOf(indexS);
    const counted = Math.abs(place - this.placeAtIndex);
    const apartS = indexS - this.lastIndexS;
    const few = counted < bounceCounts * this.expected;
    if (few && !(apartS > bounceShare * this.turnS)) {
      this.bounces++;
      return;
    }
    const fromS = this.lastIndexS;
    const sigmaS = log.sigmaS[n & log.mask]! || this.sampleS;
    const jitter = Math.sqrt(sigmaS ** 2 + this.lastSigmaS ** 2) * (counted / apartS);
    this.turnS = apartS;
    this.lastIndexS = indexS;
    this.numbering.note(n);
    this.lastSigmaS = sigmaS;
    if (fromS >= this.motion.sameWaySinceS && n - log.unbrokenFrom > unproven && !Number.isNaN(counted)) {
      const excess = this.judge(counted, sigmas * jitter, fromS);
      const held = this.placeAtIndex + Math.sign(place - this.placeAtIndex) * (this.expected + excess);
      this.placeAtIndex = sigmas * jitter > 0.5 ? held : place;
    } else {
      this.placeAtIndex = place;
    }
  }

  /** @returns counts above (or below) what the wheel makes. */
  private judge(raw: number, toleranceCounts: number, fromS: number): number {
    const off = raw - this.expected;
    const excess = Math.abs(off) <= toleranceCounts ? 0 : Math.round(off);
    const counted = this.expected + excess;
    this.sameInRow = counted === this.lastTurn?.counted ? this.sameInRow + 1 : 1;
    this.meanCounted = Number.isNaN(this.meanCounted)
      ? counted
      : this.meanCounted + (counted - this.meanCounted) * meanShare;
    const verdict = excess === 0 ? 'exact' : excess < 0 ? 'lost' : 'extra';
    const toS = this.lastIndexS;
    this.lastTurn = { verdict, counted, excess, toleranceCounts, fromS, toS };
    if (excess === 0) {
      this.exactTurns++;
      return 0;
    }
    this.lastWrongS = toS;
    if (excess < 0) {
      this.lostTurns++;
      this.lostCounts -= excess;
    } else {
      this.extraTurns++;
      this.extraCounts += excess;
    }
    return excess;
  }

  /** The count at an instant, between the teeth beside it by its share of the time; NaN where the ring does not hold both. */
  private placeOf(atS: number): number {
    const { teeth, length, mask, t, counts } = this.countsOf;
    let low = Math.max(0, teeth - length);
    let high = teeth - 1;
    if (high - low < 1 || !(t[low & mask]! <= atS) || !(t[high & mask]! > atS)) return NaN;
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (t[middle & mask]! <= atS) low = middle;
      else high = middle;
    }
    const fromS = t[low & mask]!;
    const from = counts[low & mask]!;
    return from + ((counts[high & mask]! - from) * (atS - fromS)) / (t[high & mask]! - fromS);
  }
}
