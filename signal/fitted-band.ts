/**
 * A band fitted to the teeth of the last turn: its thresholds follow the eye, and teeth that it did not count, found where an
 * edge came late, close the eye and are counted after all where that is still possible.
 */
import { BandKeeper } from '@/signal/band-keeper';
import type { BandOptions } from '@/signal/band-keeper';
import { runDetector } from '@/signal/detector';
import { keepState, resumeAfter } from '@/signal/detector-state';
import type { DetectorSink } from '@/signal/detector-state';
import { Eye } from '@/signal/eye';
import { FormerLevels } from '@/signal/former-levels';
import { GrownTeeth } from '@/signal/grown-teeth';
import { fitThresholds } from '@/signal/levels';
import type { Levels } from '@/signal/levels';
import type { Band } from '@/signal/model';
import { History } from '@/signal/past';
import { edgeRising } from '@/signal/pipeline-types';
import type { Remembered } from '@/signal/remembered';
import { ToothProof } from '@/signal/tooth-proof';
import { leastSigmas, strongShare } from '@/signal/tooth-size';

const mute: DetectorSink = { rejected: () => undefined, wobble: () => undefined };
/** After levels were found, the first stretches are looked through for weak teeth, then one in half a turn. */
const edgesOfStart = 6;
const edgesBetweenAudits = 9;
/** A step of less than this share of the eye, or than the noise, is neither made nor reported. */
const leastStep = 0.02;
const mostStep = 0.04;

export class FittedBand extends BandKeeper {
  readonly isFixed = false;
  private readonly fractions: Extract<Band, { mode: 'fitted' }>;
  private readonly proof: ToothProof;
  private readonly eye: Eye;
  /** What the band has to fit into: the eye, or the levels of a wheel that has but one tooth to differ from. */
  private readonly room: Eye | Levels;
  private readonly grown = new GrownTeeth();
  private readonly former = new FormerLevels();
  private readonly history: History;
  private readonly fresh = { operateV: NaN, releaseV: NaN };
  private auditAt = 0;
  private startedAt = 0;
  private refreshedAt = 0;

  constructor(options: BandOptions<Extract<Band, { mode: 'fitted' }>>) {
    super(options);
    const { band, rateHz, startIndex, teethPerTurn, chunk } = options;
    this.fractions = band;
    this.proof = new ToothProof(this.intake.log, teethPerTurn, options.missingPulses, this.isRing);
    this.eye = new Eye(this.intake.log, teethPerTurn, this.proof, this.isRing);
    this.room = teethPerTurn > 1 ? this.eye : this.levels;
    this.history = new History(rateHz, chunk, startIndex);
    this.finder.startFromNothing(startIndex);
  }

  run(v: Float64Array, from: number, to: number, base: number): void {
    const { detector, finder, history } = this;
    history.take(v, from, to, base + from);
    let j = from;
    while (j <= to) {
      if (finder.isBusy) {
        j = finder.run(v, j, to, base, history);
      } else {
        j = this.scan(v, j, to, base, history);
        if (j <= to && base + j >= detector.pauseAt) finder.pause(base + j, history);
      }
    }
  }

  override gap(at: number): void {
    super.gap(at);
    this.history.from = at;
  }

  override tick(nextAt: number, noiseV: number, mostNoiseV: number, quantumV: number): void {
    super.tick(nextAt, noiseV, mostNoiseV, quantumV);
    if (this.intake.log.count !== this.refreshedAt) this.refreshEye();
  }

  quietSamples(): number {
    const { rateHz, missingPulses } = this.options;
    const { periodSamples } = this.intake;
    return Number.isNaN(periodSamples) ? 2 * rateHz : Math.max(64, 4 * (missingPulses + 1) * periodSamples);
  }

  adopt(at: number, remembered: Remembered | null): void {
    const { levels, intake, weak, eye } = this;
    eye.open(levels.lowV, levels.highV);
    weak.swingV = levels.highV - levels.lowV;
    weak.noiseV = this.noiseV;
    weak.quantumV = this.quantumV;
    if (remembered && this.options.teethPerTurn > 1 && weak.survey(remembered.v, 1, remembered.count))
      this.closeEye(true);
    intake.typicalSamples = NaN;
    this.auditAt = this.startedAt = intake.edgeCount;
    this.fit();
    this.moveBand(this.fresh.operateV, this.fresh.releaseV, at / this.options.rateHz);
  }

  protected takeEdges(at: number, x: number): void {
    const { detector, fresh, room } = this;
    const isWeak = (this.isLate(0) || this.isAudit()) && this.look(0);
    const isBelieved =
      isWeak && room === this.eye && this.proof.isBelieved(this.levels.highV - this.levels.lowV);
    if (!Number.isNaN(this.weak.lobeV)) this.noteLobe(isBelieved);
    if (isBelieved && this.closeEye(this.isRising) && this.mayFindLate(at)) {
      this.recount(at);
    } else {
      if (isWeak) this.noteUncounted(0);
      this.takeOne();
    }
    this.fit();
    const eyeV = room.highV - room.lowV;
    const tolerance = Math.max(leastStep * eyeV, Math.min(mostStep * eyeV, this.noiseV || 0));
    if (
      !(Math.abs(fresh.operateV - detector.operateV) <= tolerance) ||
      !(Math.abs(fresh.releaseV - detector.releaseV) <= tolerance)
    ) {
      this.moveBand(fresh.operateV, fresh.releaseV, this.lastEdgeS);
      keepState(detector, x);
    }
    this.finder.wait(this.history);
  }

  private get isRising(): boolean {
    return (this.detector.edges.flags[0]! & edgeRising) !== 0;
  }

  private get lastEdgeS(): number {
    return this.intake.lastEdgeAt / this.options.rateHz - this.intake.delayS;
  }

  /** Takes the edge that the detector holds, and what its peak or trough says of the eye. */
  private takeOne(): void {
    const { intake, levels, eye, detector, noiseV } = this;
    const rising = this.isRising;
    const extremeV = detector.edges.extremeV[0]!;
    const otherV = intake.lastExtremeV;
    intake.take(noiseV, 0, this.detector.edges.count);
    const isBack = this.isRing && this.former.isBack(levels, rising, extremeV, Math.abs(extremeV - otherV));
    if (isBack || (!rising && this.grown.note(levels, extremeV, otherV, intake.log.count))) {
      intake.typicalSamples = NaN;
      eye.open(levels.lowV, levels.highV);
      this.refreshEye();
      return;
    }
    const swingV = levels.highV - levels.lowV;
    const isStrong = Math.abs(extremeV - otherV) >= strongShare * swingV;
    const isOpen =
      (!isStrong || eye.narrow(rising, extremeV, swingV)) &&
      (!rising || eye.narrowToLast(levels, intake.typicalSamples / this.options.rateHz, noiseV));
    if (!isOpen) this.refreshEye();
  }

  private refreshEye(): void {
    const { intake, eye, levels } = this;
    this.refreshedAt = intake.log.count;
    if (!Number.isNaN(levels.lowV))
      eye.refresh(levels, intake.typicalSamples / this.options.rateHz, this.noiseV);
  }

  /** A stretch is looked through whether or not its end came late: weak teeth may be as regular as strong ones. */
  private isAudit(): boolean {
    const { edgeCount } = this.intake;
    const { teethPerTurn } = this.options;
    if (edgeCount < this.auditAt || teethPerTurn < 2) return false;
    // Odd, so that peaks and troughs take turns.
    if (edgeCount >= this.startedAt + edgesOfStart)
      this.auditAt = edgeCount + (Math.max(edgesBetweenAudits, teethPerTurn) | 1);
    return true;
  }

  /** Where the shaft may turn to and fro, a reversal makes bumps as well, at any height of a flank. */
  private noteLobe(isBelieved: boolean): void {
    if (isBelieved || !this.isRing) this.eye.noteLobe(this.isRising, this.weak.lobeV);
    this.weak.lobeV = NaN;
  }

  /** The eye closes to the weak teeth found. @returns false where they leave too little of it. */
  private closeEye(rising: boolean): boolean {
    const { weak, eye, levels } = this;
    const swingV = levels.highV - levels.lowV;
    if (Math.abs(weak.weakestV - weak.returnV) < leastSigmas * this.noiseV) return false;
    const { lowV, highV } = eye;
    if (eye.narrow(rising, weak.returnV, swingV) && eye.narrow(!rising, weak.weakestV, swingV)) return true;
    eye.lowV = lowV;
    eye.highV = highV;
    return false;
  }

  /** The stretch since the last edge, up to sample `at`, is scanned once more with the band that its weak teeth ask for. */
  private recount(at: number): void {
    const { detector, intake, past, fresh } = this;
    if (!past) return;
    const rising = this.isRising;
    detector.edges.count = 0;
    this.fit();
    this.moveBand(fresh.operateV, fresh.releaseV, this.lastEdgeS);
    resumeAfter(detector, intake.lastEdgeAt, !rising);
    detector.pauseAt = Infinity;
    const to = at - past.base;
    let j = Math.floor(intake.lastEdgeAt) - past.base + 1;
    while (j <= to) {
      j = runDetector(detector, past.v, j, to, past.base, mute);
      if (detector.edges.count > 0) this.takeOne();
    }
  }

  private fit(): void {
    fitThresholds(this.levels, this.room, this.fractions, this.noiseV, this.fresh);
  }
}
