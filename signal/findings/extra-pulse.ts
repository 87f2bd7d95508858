import { isBetweenTeeth } from '@/signal/findings/lone-pulse';
import { FindingLatch } from '@/signal/findings/rule';
import type { FindingRule } from '@/signal/findings/rule';
import type { WheelLanes } from '@/signal/findings/wheel-lanes';
import type { WheelLane } from '@/signal/findings/wheel-log-reader';
import { wordsFor } from '@/signal/finding-words';
import type { ExtraPlace } from '@/signal/wheel-extras';

/** Points of a place (one a turn in which a pulse came there) that accuse it, and below which it is let go. */
const placeOpensAt = 3;
const placeStaysAt = 1.5;
/** More places than this share of the wheel's, and than two, are bounce: that has a rule of its own. Close to teeth, fewer. */
const mostPlacesShare = 0.25;
const mostCloseShare = 0.125;
/** Pulses that came anywhere are told for three seconds or eight turns, whichever is longer. */
const leastWindowS = 3;
const windowTurns = 8;
/** A pulse anywhere is told where the count is so old: what chatters at stand-still may look like a few teeth. */
const turnsForStrays = 2;
/** Nearer to a tooth than this, in pitches, a stray pulse is bounce of its flank. */
const clearOfTooth = 0.15;
const mostStraysShare = 0.2;

/**
 * Pulses that are no teeth: at the same place of the wheel turn after turn (a burr, a scratch, a lobe of a magnet), or
 * now and then anywhere (a chip, a spike on the wire). They are told by the regular pitches around them, so that neither
 * a start nor a reversal makes one: two parts that make one whole pitch, with whole ones on both sides, are no shaft's.
 * That proves a single one, which is said at once, as a note. Where a tooth fails, noise may cross the band instead of it:
 * that is the tooth's matter.
 */
export class ExtraPulseRule implements FindingRule {
  readonly latches: FindingLatch[];
  private readonly wheels: WheelLanes;
  /** Pulses up to here were told as those of a place, s. */
  private readonly placedToS: number[];

  constructor(wheels: WheelLanes) {
    this.wheels = wheels;
    this.latches = wheels.logs.map(() => new FindingLatch(2));
    this.placedToS = wheels.logs.map(() => -Infinity);
  }

  tick(nowS: number): void {
    const { logs, countedSinceS } = this.wheels;
    for (let i = 0; i < logs.length; i++) {
      if (logs[i]!.extras.total > 0 && nowS > countedSinceS) this.look(logs[i]!, i, nowS);
      this.latches[i]!.rest(nowS);
    }
  }

  private look(lane: WheelLane, index: number, nowS: number): void {
    const latch = this.latches[index]!;
    const { extras, tracker, absence } = lane;
    const { positions, missing, count, pitchS, isLocked } = tracker;
    if (!isLocked) return;
    const windowS = Math.max(leastWindowS, windowTurns * positions * pitchS);
    const fromS = Math.max(nowS - windowS, this.wheels.countedSinceS);
    // A turn more, for the tooth that failed just before.
    const failedFromS = fromS - positions * pitchS;
    const isOwn = ({ place }: { place: number }) => !absence.failedNear(tracker.onWheel(place), failedFromS);
    const recent = extras.since(fromS).filter(isOwn);
    if (recent.length === 0) return;
    const isPlaced = latch.open !== null && latch.open.evidence.where !== 'anywhere';
    const places = extras.placesAt(count, isPlaced ? placeStaysAt : placeOpensAt).filter(isOwn);
    if (places.length > 0 && !isBounce(places, positions)) {
      places.sort((a, b) => b.score - a.score || a.place - b.place);
      const evidence = placed(lane, places, recent.length, windowS);
      this.placedToS[index] = nowS;
      this.raise(lane, latch, evidence, places[0]!.firstS, places[0]!.lastS, nowS);
      return;
    }
    const strays = recent.filter(
      ({ t, place }) => t > this.placedToS[index]! && isClear(place - Math.floor(place)),
    );
    const teeth = Math.min(count, windowS / pitchS) * (1 - missing / positions);
    if (strays.length === 0 || recent.length > mostStraysShare * teeth || count < turnsForStrays * positions)
      return;
    // Where the first one proves nothing, beside a gap or while the speed changes, two at two places do.
    const isOpen = latch.open?.evidence.where === 'anywhere';
    const scattered = strays.some(({ place }) => !extras.isSame(place, strays[0]!.place));
    if (!isOpen && !scattered && !strays.some(({ t }) => isBetweenTeeth(lane.path.log, t))) return;
    const evidence = {
      where: 'anywhere',
      pulses: strays.length,
      windowS,
      extraPercent: (100 * strays.length) / teeth,
    };
    const instants = strays.map(({ t }) => t);
    this.raise(lane, latch, evidence, Math.min(...instants), Math.max(...instants), nowS);
  }

  private raise(
    { path }: WheelLane,
    latch: FindingLatch,
    evidence: Record<string, number | string>,
    from: number,
    at: number,
    nowS: number,
  ): void {
    const { name } = path.channel;
    // What came more than once stays worth a warning while the last of it is told.
    const isLone = evidence.pulses === 1 && (latch.open?.severity ?? 'note') === 'note';
    latch.raise(
      {
        code: 'extra-pulse',
        channel: name,
        from,
        severity: evidence.where !== 'anywhere' ? 'fault' : isLone ? 'note' : 'warn',
        outcome: 'found',
        at,
        evidence,
        ...wordsFor('extra-pulse', name, evidence),
        causedBy: null,
      },
      nowS,
    );
  }
}

function placed(
  lane: WheelLane,
  places: readonly ExtraPlace[],
  pulses: number,
  windowS: number,
): Record<string, number | string> {
  const { tracker } = lane;
  const { positions } = tracker;
  const onWheel = tracker.onWheel(places[0]!.place);
  const before = Math.floor(onWheel);
  const share = onWheel - before;
  // In reverse the tooth that comes after it is the one before it on the wheel.
  const position = tracker.isReversed ? (before + 1) % positions : before;
  return {
    where: places.length === 1 ? 'one place' : 'several places',
    places: places.length,
    afterPosition: lane.numberOf(position),
    pitchPercent: 100 * (tracker.isReversed ? 1 - share : share),
    positions,
    numbering: lane.numbering,
    turns: places[0]!.turns,
    pulses,
    windowS,
  };
}

function isBounce(places: readonly ExtraPlace[], positions: number): boolean {
  const close = places.filter(({ place }) => !isClear(place - Math.floor(place))).length;
  return (
    places.length > Math.max(2, mostPlacesShare * positions) ||
    close > Math.max(1, mostCloseShare * positions)
  );
}

function isClear(share: number): boolean {
  return share > clearOfTooth && share < 1 - clearOfTooth;
}
