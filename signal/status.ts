/** The state of a signal path at its last sample, as plain values. */
import type { ChannelPath } from '@/signal/channel-path';
import type { Finding, Margin } from '@/signal/model';
import { angleDeg, boundErrorRpm, speedAtMostRpm } from '@/signal/falling-bound';
import type { Motion } from '@/signal/motion';
import type { ChannelStatus, PipelineStatus, ShaftStatus } from '@/signal/pipeline-types';
import { fieldScale, milliteslaOfSwing } from '@/signal/statistics/field';

/** @param primary index into `paths` of the channel that speed comes from. */
export function statusOf(
  motion: Motion,
  paths: readonly ChannelPath[],
  primary: number,
  nowS: number,
  shaft: ShaftStatus,
  findings: Finding[],
): PipelineStatus {
  const { train } = motion;
  const atMost = speedAtMostRpm(motion, nowS, latencyOf(paths));
  const { pulsesPerTurn, gearRatio } = motion.rig.wheel;
  const running = motion.state === 'running';
  const bounded = Math.abs(train.rpm) > atMost;
  return {
    nowS,
    state: motion.state,
    speedRpm: known(bounded ? Math.sign(train.rpm) * atMost : train.rpm),
    speedErrorRpm: known(bounded ? boundErrorRpm(motion, atMost) : train.errorRpm),
    speedAtMostRpm: known(atMost),
    direction: motion.direction,
    pulses: motion.pulses,
    positions: motion.positions,
    turns: motion.positions / (pulsesPerTurn * gearRatio),
    countsSinceS: motion.countsSinceS,
    synced: train.synced,
    toothHz: running ? known((Math.abs(train.rpm) * pulsesPerTurn * gearRatio) / 60) : null,
    lastEdgeS: known(motion.lastEdgeS),
    delayS: paths[primary]!.delayS,
    phaseDeg: motion.rig.sensing === 'quadrature' ? known(motion.phase.deg) : null,
    channels: paths.map(channelStatus),
    margin: worstMargin(paths),
    wheelFace: train.face ? train.face.snapshot(known(angleDeg(motion, nowS))) : null,
    shaft,
    findings,
  };
}

/** The longest time from an edge's instant to the sample that proves it. */
function latencyOf(paths: readonly ChannelPath[]): number {
  let latencyS = 0;
  for (const path of paths) if (path.channel.role !== 'aux') latencyS = Math.max(latencyS, path.latencyS);
  return latencyS;
}

function channelStatus(path: ChannelPath): ChannelStatus {
  return {
    channel: path.channel.name,
    lowV: known(path.levels.lowV),
    highV: known(path.levels.highV),
    operateV: known(path.operateV),
    releaseV: known(path.releaseV),
    noiseV: known(path.noiseV),
    duty: known(path.duty),
    edges: path.edgeCount,
  };
}

function worstMargin(paths: readonly ChannelPath[]): Margin | null {
  let worst: ChannelPath | null = null;
  for (const path of paths) {
    if (path.channel.role === 'aux' || Number.isNaN(path.worstMarginV)) continue;
    if (!worst || path.worstMarginV < worst.worstMarginV) worst = path;
  }
  if (!worst) return null;
  const volts = worst.worstMarginV;
  const { kind, sensitivityMvPerMt, supplyV } = worst.channel.sensor;
  // In a difference the voltage at rest falls out.
  const scale = fieldScale({
    sensitivityMvPerMt: sensitivityMvPerMt ?? NaN,
    nominalSupplyV: null,
    supplyV,
    quiescentV: 0,
  });
  return {
    channel: worst.channel.name,
    volts,
    // A signal without any noise (computed, or far above its quantum) has no margin in sigmas.
    sigmas: worst.noiseV > 1e-9 * Math.abs(volts) ? volts / worst.noiseV : null,
    millitesla: kind === 'linear' && scale.ok ? known(milliteslaOfSwing(volts, scale.value)) : null,
  };
}

function known(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}
