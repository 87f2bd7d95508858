/** What was measured over a capture, as names and values. */
import type { Fact } from '@/client/components/facts';
import { shortNumber } from '@/client/components/finding-words';
import type { CaptureStatistics, ChannelStatistics } from '@/signal/capture-statistics/shapes';

/** 3.2 µs, 1.5 ms, 2 s. */
export function shortTime(seconds: number): string {
  const size = Math.abs(seconds);
  if (size < 1e-6) return `${shortNumber(1e9 * seconds)} ns`;
  if (size < 1e-3) return `${shortNumber(1e6 * seconds)} µs`;
  return size < 1 ? `${shortNumber(1e3 * seconds)} ms` : `${shortNumber(seconds)} s`;
}

type Turns = CaptureStatistics['turns'];

/** The slowest and the fastest turn, rpm; in reverse too the slow one is the one nearest to zero. */
function ends(turns: Turns): { slow: number; fast: number } {
  let slow = NaN;
  let fast = NaN;
  for (const { rpm } of turns) {
    if (!(Math.abs(rpm) >= Math.abs(slow))) slow = rpm;
    if (!(Math.abs(rpm) <= Math.abs(fast))) fast = rpm;
  }
  return { slow, fast };
}

/** Speeds of turns with the digits that tell the slowest from the fastest. */
export function turnSpeedText(turns: Turns): (rpm: number) => string {
  const { slow, fast } = ends(turns);
  const apart = Math.abs(fast - slow);
  const digits = apart > 0 ? Math.min(4, Math.max(0, 1 - Math.floor(Math.log10(apart)))) : 1;
  return (rpm) => rpm.toFixed(digits).replace('-', '\u2212');
}

const percent = (share: number): string => `${shortNumber(Number((100 * share).toPrecision(2)))} %`;

/** Of the speed and the wheel. */
export function motionFacts({ turns, jitter, speedOrders, swingOrders, pair }: CaptureStatistics): Fact[] {
  const facts: Fact[] = [];
  if (turns.length > 0) {
    const text = turnSpeedText(turns);
    const { slow, fast } = ends(turns);
    const mean = turns.reduce((sum, { rpm }) => sum + rpm, 0) / turns.length;
    facts.push(
      { name: 'whole turns', value: String(turns.length) },
      { name: 'mean speed of a turn', value: `${text(mean)} rpm` },
      { name: 'slowest turn', value: `${text(slow)} rpm` },
      { name: 'fastest turn', value: `${text(fast)} rpm` },
    );
  }
  if (jitter) {
    facts.push(
      { name: 'jitter of a period, rms', value: shortTime(jitter.periodRmsS) },
      { name: 'cycle to cycle, rms', value: shortTime(jitter.cycleToCycleRmsS) },
      {
        name: 'time-interval error, rms',
        value: `${shortNumber(Number(jitter.timeIntervalErrorToothDeg.toPrecision(3)))}° of a pitch`,
      },
    );
  }
  const speedOnce = speedOrders?.lines.find(({ order }) => order === 1);
  if (speedOrders && speedOnce)
    facts.push({
      name: 'speed, once a turn',
      value: `± ${percent(speedOnce.amplitude / Math.abs(speedOrders.meanRpm))}`,
    });
  const swingOnce = swingOrders?.lines.find(({ order }) => order === 1);
  if (swingOrders && swingOnce)
    facts.push({
      name: 'swing, once a turn',
      value: `± ${percent(swingOnce.amplitude / swingOrders.meanV)}`,
    });
  if (pair)
    facts.push(
      {
        name: 'phase A to B',
        value: `${shortNumber(pair.phaseDeg)}° ± ${shortNumber(pair.standardErrorDeg)}°`,
      },
      { name: 'swing of A over B', value: shortNumber(pair.gainRatio) },
    );
  return facts;
}

/** Of one channel; what the capture cannot tell is left out. */
export function channelFacts({
  sine,
  levels,
  dutyFactor,
  riseS,
  fallS,
  overshootPct,
}: ChannelStatistics): Fact[] {
  const facts: Fact[] = [];
  if (sine)
    facts.push(
      { name: 'sine that fits', value: `${shortNumber(sine.offsetV)} ± ${shortNumber(sine.amplitudeV)} V` },
      { name: 'what it leaves, rms', value: `${shortNumber(1000 * sine.residualRmsV)} mV` },
    );
  else if (levels)
    facts.push({
      name: 'state levels',
      value: `${shortNumber(levels.lowV)} and ${shortNumber(levels.highV)} V`,
    });
  if (dutyFactor)
    facts.push({
      name: 'duty factor',
      value: `${dutyFactor.mean.toFixed(3)} (${dutyFactor.least.toFixed(3)} to ${dutyFactor.most.toFixed(3)})`,
    });
  if (riseS && fallS)
    facts.push({
      name: 'rise and fall, 10 to 90 %',
      value: `${shortTime(riseS.mean)}, ${shortTime(fallS.mean)}`,
    });
  if (overshootPct !== null) facts.push({ name: 'overshoot', value: percent(overshootPct / 100) });
  return facts;
}
