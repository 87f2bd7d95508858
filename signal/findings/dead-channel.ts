import type { ChannelPath } from '@/signal/channel-path';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule, RuleContext } from '@/signal/findings/rule';
import { unrestIntervals, unrestOf } from '@/signal/findings/unrest';
import type { RunReference } from '@/signal/findings/unrest';
import type { UnseenTeeth } from '@/signal/findings/unseen-teeth';
import { wordsFor } from '@/signal/finding-words';
import type { Finding } from '@/signal/model';
import type { ToothLog } from '@/signal/tooth-log';

/** A floating line makes an edge now and then, and is no sound channel for that, s. */
const shortHoldS = 0.5;
/**
 * So many edges of another channel without one of its own: a fitted band looks for new levels after four teeth, and has
 * them after two more.
 */
const otherEdgesNeeded = 20;
/** So many turns of the shaft, and of its wheel, without an index, and so long: its levels have to be found first. */
const indexTurns = 5;
const indexQuietS = 0.5;
/** What still swings so much is not dead, whatever its band makes of it: share of its usual swing, or of the supply; sigmas. */
const aliveShare = 0.15;
const aliveOfSupply = 0.1;
const aliveSigmas = 12;
const aliveS = 0.5;
/** A wheel swings more than what hums or rustles on a shaft at rest: share of the supply; with the mains, less than that. */
const restOfSupply = 0.02;
const humOfSupply = 0.1;
/** Slower than this, against the last run: the shaft may stand and shake on one flank. */
const farSlower = 3;
/** So long, and ten teeth, without a sign of shaking. */
const restS = 0.5;
const mainsHz = [50, 60, 100, 120];
const humNeededS = 1;

type Evidence = Finding['evidence'];

/**
 * A channel that makes no edge while another one does; an index that does not come; or a linear sensor that rests at the
 * very end of its range (it rests at its quiescent voltage when sound), flat, for as long as it takes to be called
 * stopped. A flat signal anywhere else may just be a shaft that stands still: no finding. Nor is the other channel of a
 * shaft dead that stands and shakes with a flank under one sensor.
 */
export class DeadChannelRule implements FindingRule {
  readonly latches: FindingLatch[];
  private readonly context: RuleContext;
  private readonly unseen: UnseenTeeth;
  private readonly references: RunReference[];
  /** Edges of each channel when the judged one last made one. */
  private readonly marks: number[][];
  private readonly ownEdges: number[];
  private readonly quietFromS: number[];
  private readonly flatFromS: number[];
  private readonly shookS: number[];
  private readonly humFromS: number[];

  /** @param references of the lanes, in their order. */
  constructor(context: RuleContext, references: RunReference[], unseen: UnseenTeeth) {
    const { paths } = context;
    this.unseen = unseen;
    this.context = context;
    this.latches = paths.map(() => new FindingLatch(shortHoldS));
    this.references = references;
    this.marks = paths.map(() => paths.map(() => 0));
    this.ownEdges = paths.map(() => 0);
    this.quietFromS = paths.map(() => NaN);
    this.flatFromS = paths.map(() => NaN);
    this.shookS = paths.map(() => -Infinity);
    this.humFromS = paths.map(() => NaN);
  }

  tick(nowS: number): void {
    const { paths, index } = this.context;
    for (const reference of this.references) reference.tick(nowS);
    for (let k = 0; k < paths.length; k++) {
      const path = paths[k]!;
      this.mark(path, k, nowS);
      const found = this.besideOthers(k, nowS) ?? (k === index ? this.withoutIndex(nowS) : null);
      if (found) this.raise(path, k, this.quietFromS[k]!, found, nowS);
      else if (!this.floats(path, k, nowS) && path.channel.role !== 'aux') this.alone(path, k, nowS);
    }
  }

  gap(): void {
    this.quietFromS.fill(NaN);
    this.flatFromS.fill(NaN);
    this.humFromS.fill(NaN);
  }

  private mark(path: ChannelPath, k: number, nowS: number): void {
    if (path.edgeCount === this.ownEdges[k] && !Number.isNaN(this.quietFromS[k]!)) return;
    this.ownEdges[k] = path.edgeCount;
    this.quietFromS[k] = nowS;
    const marks = this.marks[k]!;
    for (let m = 0; m < marks.length; m++) marks[m] = this.context.paths[m]!.edgeCount;
    this.latches[k]!.rest(nowS);
  }

  private besideOthers(k: number, nowS: number): Evidence | null {
    const { paths, lanes, rateHz, rig } = this.context;
    if (!lanes.includes(k)) return null;
    let most = 0;
    let busiest = -1;
    let busy = 0;
    for (const m of lanes) {
      const other = paths[m]!;
      const edges = other.edgeCount - this.marks[k]![m]!;
      if (m === k || edges === 0) continue;
      if (edges >= otherEdgesNeeded && mayRest(other, nowS, rateHz)) {
        this.marks[k]![m] = other.edgeCount;
        continue;
      }
      if (edges >= otherEdgesNeeded) busy++;
      if (edges <= most) continue;
      most = edges;
      busiest = m;
    }
    if (most < otherEdgesNeeded || isAlive(paths[k]!) || this.unseen.of(k)) return null;
    const evidence = {
      otherChannel: paths[busiest]!.channel.name,
      otherEdges: most,
      quietS: nowS - this.quietFromS[k]!,
    };
    if (busy > 1 || this.latches[k]!.open) return evidence;
    const { log } = paths[busiest]!;
    const unrest = unrestOf(log, -Infinity, 1 / rateHz, rig.wheel.missingPulses);
    const { toothS } = this.references[lanes.indexOf(busiest)]!;
    // Shaking looks regular for a moment now and then.
    if (unrest?.isIrregular) this.shookS[busiest] = nowS;
    if (!unrest || nowS - this.shookS[busiest]! < restS + 10 * unrest.meanS) return null;
    return unrest.meanS > farSlower * toothS ? null : evidence;
  }

  /** All that comes on it is the mains, while another channel shows how the shaft turns. */
  private floats(path: ChannelPath, k: number, nowS: number): boolean {
    const { lanes, rateHz } = this.context;
    if (lanes.length < 2 || !lanes.includes(k)) return false;
    const own = humOn(path.log, nowS, rateHz);
    const isAlone = !Number.isNaN(own) && this.turnsBeside(k, own, nowS);
    if (!isAlone) {
      this.humFromS[k] = NaN;
      return false;
    }
    if (Number.isNaN(this.humFromS[k]!)) this.humFromS[k] = nowS;
    const fromS = this.humFromS[k]!;
    if (nowS - fromS >= humNeededS) this.raise(path, k, fromS, { humHz: own, humS: nowS - fromS }, nowS);
    return true;
  }

  /** Another channel than `k` has teeth that come steadily, and not at `humHz`. */
  private turnsBeside(k: number, humHz: number, nowS: number): boolean {
    const { paths, lanes, rateHz, rig } = this.context;
    return lanes.some((m) => {
      const other = m === k ? null : unrestOf(paths[m]!.log, -Infinity, 1 / rateHz, rig.wheel.missingPulses);
      if (!other || other.isIrregular || nowS - other.lastS > 4 * other.meanS) return false;
      return Math.abs(other.meanS * humHz - 1) > 0.1;
    });
  }

  private withoutIndex(nowS: number): Evidence | null {
    const { paths, index, primary, rig, motion } = this.context;
    const { pulsesPerTurn, missingPulses, gearRatio } = rig.wheel;
    if (motion.state !== 'running') return null;
    const teeth = (paths[primary]!.edgeCount - this.marks[index]![primary]!) / 2;
    const turns = teeth / ((pulsesPerTurn - missingPulses) * Math.max(1, gearRatio));
    const quietS = nowS - this.quietFromS[index]!;
    if (!(turns >= indexTurns) || quietS < indexQuietS) return null;
    return { turnsWithoutIndex: turns, quietS };
  }

  private alone(path: ChannelPath, k: number, nowS: number): void {
    const spreadV = path.spreadHighV - path.spreadLowV;
    if (!(spreadV >= 0)) return;
    const levelV = path.spreadHighV;
    path.restartSpread();
    const latch = this.latches[k]!;
    if (path.channel.sensor.kind !== 'linear' || !isAtEnd(path, levelV, spreadV)) {
      this.flatFromS[k] = NaN;
      latch.rest(nowS);
      return;
    }
    if (Number.isNaN(this.flatFromS[k]!)) this.flatFromS[k] = nowS;
    const from = this.flatFromS[k]!;
    if (nowS - from < this.context.settings.speed.stoppedAfterS) return;
    this.raise(path, k, from, { levelV, flatS: nowS - from }, nowS);
  }

  private raise(path: ChannelPath, k: number, fromS: number, evidence: Evidence, nowS: number): void {
    const { name } = path.channel;
    this.latches[k]!.raise(
      {
        code: 'dead-channel',
        channel: name,
        from: fromS,
        severity: 'fault',
        outcome: 'found',
        at: fromS,
        evidence,
        ...wordsFor('dead-channel', name, evidence),
        causedBy: null,
      },
      nowS,
    );
  }
}

/** What makes its edges may be on the line while the shaft stands. */
function mayRest({ log, levels, channel }: ChannelPath, nowS: number, rateHz: number): boolean {
  const { supplyV } = channel.sensor;
  const swingV = levels.highV - levels.lowV;
  if (supplyV !== null && swingV < restOfSupply * supplyV) return true;
  if (supplyV !== null && !(swingV < humOfSupply * supplyV)) return false;
  return !Number.isNaN(humOn(log, nowS, rateHz));
}

/** It goes up and down: a shaft that shakes within a tooth may keep it from its band, or it is still to be found. */
function isAlive({ slow, levels, noiseV, channel }: ChannelPath): boolean {
  const { v, mask, count, rateHz, unbrokenFrom } = slow;
  const from = Math.max(unbrokenFrom, count - Math.round(aliveS * rateHz), count - v.length, 0);
  let low = Infinity;
  let high = -Infinity;
  for (let n = from; n < count; n++) {
    const x = v[n & mask]!;
    if (x < low) low = x;
    if (x > high) high = x;
  }
  const usualV = levels.highV - levels.lowV;
  const leastV = usualV > 0 ? aliveShare * usualV : aliveOfSupply * (channel.sensor.supplyV ?? NaN);
  return high - low > leastV && !(high - low < aliveSigmas * noiseV);
}

/** Frequency of the mains, or twice that, where the teeth of a channel come so; else NaN. */
function humOn(log: ToothLog, nowS: number, rateHz: number): number {
  const { riseS, mask, count } = log;
  const roughlyS =
    (riseS[(count - 1) & mask]! - riseS[(count - 1 - unrestIntervals) & mask]!) / unrestIntervals;
  let isNear = false;
  for (let i = 0; i < mainsHz.length; i++) if (Math.abs(roughlyS * mainsHz[i]! - 1) < 0.02) isNear = true;
  if (!isNear) return NaN;
  const unrest = unrestOf(log, -Infinity, 1 / rateHz, 0);
  if (!unrest || unrest.isIrregular || nowS - unrest.lastS > 4 * unrest.meanS) return NaN;
  return mainsHz.find((hz) => Math.abs(unrest.meanS * hz - 1) < 0.01) ?? NaN;
}

/** At an end of the sensor's supply, or of the converter: no field takes a linear sensor there and leaves it flat. */
function isAtEnd({ channel, rails }: ChannelPath, levelV: number, spreadV: number): boolean {
  const { supplyV } = channel.sensor;
  // What noise the input picks up may swing; its middle stands where it stands.
  const middleV = levelV - spreadV / 2;
  if (supplyV !== null && supplyV > 0 && spreadV <= 0.06 * supplyV)
    if (middleV < 0.03 * supplyV || middleV > 0.97 * supplyV) return true;
  if (!rails || !Number.isFinite(rails.highV - rails.lowV)) return false;
  const within = 0.005 * (rails.highV - rails.lowV);
  return spreadV <= within && (levelV >= rails.highV - within || levelV - spreadV <= rails.lowV + within);
}
