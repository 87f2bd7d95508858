/**
 * Speed from the instants of teeth: per tooth, per turn (the last whole turn, slid on by each tooth) or over a window
 * (least squares of instant over position).
 *
 * With k positions passed in T seconds the shaft turns at 60 k / (N gear T) rpm. Standard error of a period from two
 * instants, each with the error s: sqrt(2) s / k; from the line through K + 1 of them: s sqrt(12 / (K (K + 1) (K + 2))).
 * Unevenness of the teeth themselves is not in it.
 */
import type { SpeedMethod } from '@/signal/model';

export type Speed = { rpm: number; errorRpm: number };

export class SpeedMeter {
  readonly latest: Speed = { rpm: NaN, errorRpm: NaN };
  /** Instant of the tooth that `add` is to take, s, and its standard error, s. */
  t = NaN;
  sigmaS = NaN;
  private readonly method: SpeedMethod;
  private readonly windowS: number;
  private readonly turnPositions: number;
  /** rpm of one position a second. */
  private readonly factor: number;
  private times: Float64Array;
  private places: Float64Array;
  /** Entries are `first .. next - 1`, each at its number modulo the length. */
  private first = 0;
  private next = 0;
  private sinceRefit = 0;
  private originS = 0;
  private originPlace = 0;
  private sumT = 0;
  private sumP = 0;
  private sumPP = 0;
  private sumTP = 0;

  /** @param turnPositions positions of the wheel; `gearRatio` turns of the wheel a turn of the shaft. */
  constructor(method: SpeedMethod, windowS: number, turnPositions: number, gearRatio: number) {
    this.method = method;
    this.windowS = windowS;
    this.turnPositions = turnPositions;
    this.factor = 60 / (turnPositions * gearRatio);
    this.times = new Float64Array(64);
    this.places = new Float64Array(64);
  }

  /** Nothing is known of the speed until two more teeth have come. */
  reset(): void {
    this.first = this.next = 0;
    this.latest.rpm = this.latest.errorRpm = NaN;
    this.clearSums();
  }

  private get mask(): number {
    return this.times.length - 1;
  }

  get count(): number {
    return this.next - this.first;
  }

  /** The only tooth so far is moved in time: its filter delay became known. */
  retimeFirst(t: number): void {
    if (this.count !== 1) return;
    this.times[this.first & this.mask] = t;
    this.refit();
  }

  /**
   * Takes a tooth at the instant `t` with the error `sigmaS`.
   * @param place positions counted so far.
   * @returns true where `latest` holds a speed.
   */
  add(place: number): boolean {
    this.push(place);
    if (this.method === 'turn') this.dropTo(place - this.turnPositions);
    else if (this.method === 'tooth') this.keepLast(2);
    else this.dropBeforeWindow();
    const intervals = this.count - 1;
    if (intervals < 1) return false;
    if (this.method === 'window' && intervals > 1) this.fromLine();
    else this.fromEnds();
    return true;
  }

  private push(place: number): void {
    if (this.count === this.times.length) this.widen();
    const i = this.next & this.mask;
    this.times[i] = this.t;
    this.places[i] = place;
    this.next++;
    if (this.method !== 'window') return;
    if (this.count === 1) this.refit();
    else this.account(this.t, place, 1);
  }

  private widen(): void {
    const times = new Float64Array(this.times.length * 2);
    const places = new Float64Array(times.length);
    for (let k = this.first; k < this.next; k++) {
      times[k & (times.length - 1)] = this.times[k & this.mask]!;
      places[k & (times.length - 1)] = this.places[k & this.mask]!;
    }
    this.times = times;
    this.places = places;
  }

  private dropTo(place: number): void {
    while (this.count > 2 && this.places[(this.first + 1) & this.mask]! <= place) this.first++;
    // A place that a missed tooth left empty: start from the one after it.
    if (this.count > 2 && this.places[this.first & this.mask]! < place) this.first++;
  }

  private keepLast(count: number): void {
    while (this.count > count) this.first++;
  }

  private dropBeforeWindow(): void {
    const t = this.t - this.windowS;
    while (this.count > 2 && this.times[this.first & this.mask]! < t) {
      const i = this.first & this.mask;
      this.account(this.times[i]!, this.places[i]!, -1);
      this.first++;
    }
    // Running sums drift; they are taken anew every 256 teeth.
    if (++this.sinceRefit >= 256) this.refit();
  }

  private account(t: number, place: number, sign: 1 | -1): void {
    const x = t - this.originS;
    const p = place - this.originPlace;
    this.sumT += sign * x;
    this.sumP += sign * p;
    this.sumPP += sign * p * p;
    this.sumTP += sign * x * p;
  }

  private clearSums(): void {
    this.sumT = this.sumP = this.sumPP = this.sumTP = 0;
    this.sinceRefit = 0;
  }

  private refit(): void {
    this.clearSums();
    this.originS = this.times[this.first & this.mask]!;
    this.originPlace = this.places[this.first & this.mask]!;
    for (let k = this.first; k < this.next; k++)
      this.account(this.times[k & this.mask]!, this.places[k & this.mask]!, 1);
  }

  private fromEnds(): void {
    const a = this.first & this.mask;
    const b = (this.next - 1) & this.mask;
    const spans = this.places[b]! - this.places[a]!;
    const perPositionS = (this.times[b]! - this.times[a]!) / spans;
    const rpm = this.factor / perPositionS;
    this.latest.rpm = rpm;
    this.latest.errorRpm = (rpm * Math.SQRT2 * this.sigmaS) / (spans * perPositionS);
  }

  private fromLine(): void {
    const n = this.count;
    const spread = this.sumPP - (this.sumP * this.sumP) / n;
    const perPositionS = (this.sumTP - (this.sumT * this.sumP) / n) / spread;
    const rpm = this.factor / perPositionS;
    this.latest.rpm = rpm;
    this.latest.errorRpm = (rpm * this.sigmaS) / (Math.sqrt(spread) * perPositionS);
  }
}
