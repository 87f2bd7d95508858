import type { ChannelPath } from '@/signal/channel-path';
import { RecentBounces } from '@/signal/findings/recent-bounces';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { wordsFor } from '@/signal/finding-words';
import { createIntervalMeter, isAtPlaces, noteIntervals, restartIntervals } from '@/signal/interval-meter';
import type { IntervalMeter } from '@/signal/interval-meter';
import { readableFrom } from '@/signal/tooth-log';

/** Share of the teeth that came too soon, each beside a whole one: opens the finding, and keeps it. */
const opensAt = 0.05;
const staysAt = 0.02;
const faultAt = 0.2;
const windowS = 0.3;
const fewestTeeth = 8;
/** A sudden stop makes one such pair, not several. */
const fewestShort = 3;
/** An open finding stays until bounces keep away for so many times their mean distance, but no longer than so many seconds. */
const timesApart = 2;
const longestApartS = 1.5;
/** Crossings that band or hold-off kept back, as share of the edges. */
const heldOpensAt = 0.05;
const heldStaysAt = 0.025;
const heldWindowS = 1;
const fewestEdges = 32;
const fewestKept = 3;
/** From the middle to the switching point, share of a tooth: a sine takes twice as long. */
const longestWay = 0.015;
const sigmasOfBand = 6;

type Lane = {
  path: ChannelPath;
  meter: IntervalMeter;
  recent: RecentBounces;
  fromS: number;
  heldFromS: number;
  keptBack: number;
  edges: number;
  teeth: number;
};

/**
 * Edges that the flank's ringing, bounce or noise made are counted as teeth. Where the band or the hold-off keeps them back,
 * that is a note: as things are nothing is counted wrong. A burr on the rim comes at one place in the turn, and a weak
 * tooth that stays in the band leaves a hole in the row: neither is bounce.
 */
export class EdgeBounceRule implements FindingRule {
  readonly latches: FindingLatch[];
  private readonly context: RuleContext;
  private readonly lanes: Lane[];
  private readonly teethPerTurn: number;
  private readonly missing: number;

  constructor(context: RuleContext) {
    const { rig, paths } = context;
    const { pulsesPerTurn, missingPulses } = rig.wheel;
    this.context = context;
    this.missing = missingPulses;
    this.teethPerTurn = pulsesPerTurn - this.missing;
    this.lanes = context.lanes.map((index) => ({
      path: paths[index]!,
      meter: createIntervalMeter(),
      recent: new RecentBounces(),
      fromS: NaN,
      heldFromS: NaN,
      keptBack: 0,
      edges: 0,
      teeth: 0,
    }));
    this.latches = this.lanes.map(() => new FindingLatch(2));
  }

  tick(nowS: number): void {
    for (let k = 0; k < this.lanes.length; k++) {
      const lane = this.lanes[k]!;
      const latch = this.latches[k]!;
      noteIntervals(lane.meter, lane.path.log, this.missing);
      this.judgeCounted(lane, latch, nowS);
      this.judgeHeld(lane, latch, nowS);
      latch.rest(nowS);
    }
  }

  gap(): void {
    for (const lane of this.lanes) {
      lane.fromS = lane.heldFromS = NaN;
      restartIntervals(lane.meter);
      lane.recent.clear();
    }
  }

  private judgeCounted(lane: Lane, latch: FindingLatch, nowS: number): void {
    const { meter, recent } = lane;
    if (Number.isNaN(lane.fromS)) lane.fromS = nowS;
    if (!(nowS - lane.fromS >= windowS) || meter.counted < fewestTeeth) return;
    recent.add(lane.fromS, meter.counted, meter.short, meter.shortestS, nowS);
    const isOpen = latch.open !== null && latch.open.severity !== 'note';
    // The window alone where it holds enough, so that bounce which sets in is seen at its full share.
    const { fromS, counted, short, shortestS } =
      meter.short >= fewestShort
        ? { fromS: lane.fromS, counted: meter.counted, short: meter.short, shortestS: meter.shortestS }
        : recent;
    const share = short / counted;
    const apartS = (timesApart * (nowS - fromS)) / short;
    const isThere = !isOpen || nowS - meter.lastShortT < Math.min(apartS, longestApartS);
    const isMany = short >= fewestShort && share > (isOpen ? staysAt : opensAt);
    if (isMany && isThere && !isAtPlaces(meter, this.teethPerTurn)) {
      this.raise(latch, lane, nowS, share > faultAt ? 'fault' : 'warn', fromS, meter.lastShortT, {
        shortPercent: 100 * share,
        shortestS,
        toothS: meter.toothS,
      });
    }
    restartIntervals(meter);
    lane.fromS = nowS;
  }

  private judgeHeld(lane: Lane, latch: FindingLatch, nowS: number): void {
    const { path } = lane;
    const edges = path.edgeCount - lane.edges;
    const isFresh = Number.isNaN(lane.heldFromS);
    if (!isFresh && (nowS - lane.heldFromS < heldWindowS || edges < fewestEdges)) return;
    const fromS = lane.heldFromS;
    const kept = path.keptBackCount - lane.keptBack;
    const teeth = path.log.count - lane.teeth;
    lane.heldFromS = nowS;
    lane.edges = path.edgeCount;
    lane.keptBack = path.keptBackCount;
    lane.teeth = path.log.count;
    if (isFresh || (latch.open && latch.open.severity !== 'note')) return;
    const share = kept / edges;
    if (kept < fewestKept || share <= (latch.open ? heldStaysAt : heldOpensAt)) return;
    const { holdoffS } = this.context.settings;
    if (lane.meter.short > 0 || isNoBounce(path, Math.min(teeth, 64), this.missing, holdoffS, nowS)) return;
    this.raise(latch, lane, nowS, 'note', fromS, nowS, { heldBackPercent: 100 * share, holdoffS });
  }

  private raise(
    latch: FindingLatch,
    { path }: Lane,
    nowS: number,
    severity: 'note' | 'warn' | 'fault',
    fromS: number,
    atS: number,
    more: Record<string, number>,
  ): void {
    const { name } = path.channel;
    const evidence = { ...more, counted: this.context.motion.tracker ? 'steps' : 'teeth' };
    latch.raise(
      {
        code: 'edge-bounce',
        channel: name,
        from: fromS,
        severity,
        outcome: 'found',
        at: atS,
        evidence,
        ...wordsFor('edge-bounce', name, evidence),
        causedBy: null,
      },
      nowS,
    );
  }
}

/**
 * True where the flank is gentle or the band no wider than the noise, so that it is noise; where teeth stayed away among the last ones or stay away now; or where
 * the hold-off is as long as a state: what was kept back were teeth then.
 */
function isNoBounce(
  { log, duty, operateV, releaseV, noiseV }: ChannelPath,
  teeth: number,
  missing: number,
  holdoffS: number,
  nowS: number,
): boolean {
  const { riseS, riseWayS, fallWayS, mask, count } = log;
  if (operateV - releaseV < sigmasOfBand * noiseV) return true;
  const oldest = readableFrom(log, count - teeth);
  const last = (count - 1) & mask;
  let longestS = 0;
  let risesS = 0;
  let fallsS = 0;
  for (let k = oldest + 1; k < count; k++) {
    longestS = Math.max(longestS, riseS[k & mask]! - riseS[(k - 1) & mask]!);
    risesS += riseWayS[k & mask]!;
    // Of the tooth before: the last one need not have fallen yet.
    fallsS += fallWayS[(k - 1) & mask]!;
  }
  const meanS = (riseS[last]! - riseS[oldest & mask]!) / (count - 1 - oldest);
  if (Math.max(risesS, fallsS) / (count - 1 - oldest) > longestWay * meanS) return true;
  if (nowS - riseS[last]! > 4 * (missing + 1) * meanS) return true;
  if (holdoffS > 0.6 * Math.min(duty, 1 - duty) * meanS) return true;
  return !(longestS < 1.6 * (missing + 1) * meanS);
}
