/**
 * Speed from the instants of teeth: per tooth, per turn (the last whole turn, slid on by each tooth) or over a window
 * (least squares of instant over position).
 *
 * With k positions passed in T seconds the shaft turns at 60 k / (N gear T) rpm. Before the first whole turn `turn` takes
 * what there is, `window` takes two teeth at least. What it says of its error is in `speed-error.ts`.
 */
import { fitTurns, positionsForFit } from '@/signal/acceleration-fit';
import type { Acceleration } from '@/signal/acceleration-fit';
import type { SpeedMethod } from '@/signal/model';
import { SpeedError } from '@/signal/speed-error';
import { SpeedRing } from '@/signal/speed-ring';
import { WholeTurn } from '@/signal/whole-turn';
import { WindowLine } from '@/signal/window-line';

/** Two turns are kept of wheels up to this size, one of larger ones, whose acceleration is not told. */
const mostKeptTwice = 4096;

export type Speed = { rpm: number; errorRpm: number };

export class SpeedMeter {
  readonly latest: Speed = { rpm: NaN, errorRpm: NaN };
  readonly ring = new SpeedRing();
  readonly error: SpeedError;
  /** Instant of the tooth that `add` is to take, s, its standard error, s, and its learnt offset in positions. */
  t = NaN;
  sigmaS = NaN;
  /** Of that error the part of the sample grid, s, and samples a second; see `SpeedError`. */
  gridS = 0;
  rateHz = NaN;
  offset = 0;
  private readonly method: SpeedMethod;
  private readonly turnPositions: number;
  private readonly kept: number;
  /** rpm of one position a second. */
  private readonly factor: number;
  private readonly turn: WholeTurn;
  private readonly line: WindowLine;

  /** @param turnPositions positions of the wheel; `gearRatio` turns of the wheel a turn of the shaft. */
  constructor(method: SpeedMethod, windowS: number, turnPositions: number, gearRatio: number) {
    this.method = method;
    this.turnPositions = turnPositions;
    this.kept = 1 + (turnPositions > mostKeptTwice ? turnPositions : positionsForFit(turnPositions));
    this.factor = 60 / (turnPositions * gearRatio);
    this.error = new SpeedError(this.ring, turnPositions);
    this.turn = new WholeTurn(this.ring, turnPositions);
    this.line = new WindowLine(this.ring, windowS);
  }

  /** Nothing is known of the speed until two more teeth have come. How far teeth scatter is remembered. */
  reset(): void {
    this.ring.clear();
    this.latest.rpm = this.latest.errorRpm = NaN;
    this.error.scatter.loosen();
    this.turn.restart();
    this.line.refit();
  }

  get count(): number {
    return this.ring.count;
  }

  /** The only tooth so far is moved in time: its filter delay became known. */
  retimeFirst(t: number): void {
    const { ring } = this;
    if (ring.count !== 1) return;
    ring.times[ring.first & ring.mask] = t;
    this.line.refit();
  }

  /** The pulse taken last was no tooth: the one at `t` stands in its place. */
  replaceNewest(t: number): void {
    const { ring } = this;
    const i = (ring.next - 1) & ring.mask;
    ring.times[i] = t;
    ring.falls[i] = ring.turns[i] = NaN;
    this.line.refit();
    this.turn.scatter.interrupt();
  }

  /** The tooth taken last ended at `t`. */
  fall(): void {
    const { ring } = this;
    const i = (ring.next - 1) & ring.mask;
    // The first fall after it: another one is that of a pulse which waits to be judged.
    if (ring.count > 0 && Number.isNaN(ring.falls[i]!)) ring.falls[i] = this.t;
  }

  /**
   * Learnt offsets come into use, change, or end.
   * @param offsets by position; null: none. @param origin place of position 0.
   * @param variance of a tooth's place about these marks, positions squared; NaN: not known.
   */
  remark(offsets: Float64Array | null, origin: number, variance: number): void {
    const { ring, turnPositions: n } = this;
    for (let k = ring.first; k < ring.next; k++) {
      const place = ring.places[k & ring.mask]!;
      ring.marks[k & ring.mask] = offsets ? place + offsets[(((place - origin) % n) + n) % n]! : place;
    }
    this.line.refit();
    this.error.scatter.presume(variance);
  }

  /**
   * Takes a tooth at the instant `t` with the error `sigmaS`.
   * @param place positions counted so far.
   * @returns true where `latest` holds a speed.
   */
  add(place: number): boolean {
    const { ring, method, error, turn, line } = this;
    const i = ring.room();
    ring.times[i] = this.t;
    ring.places[i] = place;
    ring.marks[i] = place + this.offset;
    let from = ring.next - 2;
    if (method === 'turn') {
      turn.follow(true);
      from = turn.from;
    } else if (method === 'window') {
      line.slide();
      turn.follow(false);
      from = line.from;
    }
    const oldest = place - this.kept;
    while (ring.first < from && ring.places[ring.first & ring.mask]! < oldest) ring.first++;
    error.scatter.note();
    if (ring.count < 2) return false;
    error.sigmaS = this.sigmaS;
    error.gridS = this.gridS;
    error.rateHz = this.rateHz;
    this.judge(from);
    const { latest } = this;
    // Two teeth at one instant: a filter's delay that changed between them. There is no speed in that.
    if (!(error.perPositionS > 0)) {
      latest.rpm = latest.errorRpm = NaN;
      return false;
    }
    latest.rpm = this.factor / error.perPositionS;
    latest.errorRpm = latest.rpm * error.share;
    return true;
  }

  /** Of the wheel, as of the newest tooth: computed when asked. */
  acceleration(): Acceleration {
    const { told } = this.error;
    return fitTurns(this.ring, this.turnPositions, told > 0 ? Math.sqrt(told) : 0);
  }

  /** Time for one position and its error, from the entry `from` to the newest. */
  private judge(from: number): void {
    const { ring, method, error, turn, line } = this;
    const { times, marks, mask, next } = ring;
    const a = from & mask;
    const b = (next - 1) & mask;
    error.ends.follow();
    error.perPositionS = (times[b]! - times[a]!) / (marks[b]! - marks[a]!);
    if (method !== 'tooth' && turn.turnS > 0) {
      error.ends.measure(turn.from, turn.turnS / this.turnPositions);
      turn.scatter.growth = error.ends.growth;
      turn.scatter.told = error.told;
      turn.scatter.turnS = turn.turnS;
      turn.scatter.endS = turn.endS;
      turn.scatter.spans = ring.places[b]! - ring.places[(next - 2) & mask]!;
      turn.scatter.note(turn.edges, error.scatter);
    }
    if (method === 'turn' && turn.turnS > 0) {
      error.perPositionS = turn.turnS / this.turnPositions;
      error.ofTurn(from, turn.edges, turn.scatter);
    } else if (method === 'window' && next - from > 2) {
      const endsS = error.perPositionS;
      line.solve();
      error.perPositionS = line.perPositionS;
      error.ofLine(line, turn.turnS > 0 && turn.from >= from ? turn.scatter : null, endsS);
      error.perPositionS *= 1 + error.bent;
    } else {
      error.ofEnds(from);
    }
  }
}
