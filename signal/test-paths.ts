/** The way from volts to the motion as the pipeline goes it, open for the tests beside to look into. Not part of the product. */
import { ChannelPath, chunkSamples } from '@/signal/channel-path';
import { createSpeedColumns } from '@/signal/columns';
import { mergeEdges } from '@/signal/edge-merge';
import { IndexWatch } from '@/signal/index-watch';
import { defaultSettings } from '@/signal/model';
import type { RigSetup, Settings } from '@/signal/model';
import { Motion } from '@/signal/motion';
import type { DirectionChange } from '@/signal/pipeline-types';
import { samplesPerTick } from '@/signal/ticks';
import { neededRoles } from '@/signal/validate-setup';

export type OpenPaths = {
  motion: Motion;
  watch: IndexWatch | null;
  paths: ChannelPath[];
  speeds: { t: number; rpm: number }[];
  directions: DirectionChange[];
};

/**
 * @param volts of each of the rig's channels, over the time in seconds. @param lost samples lost from an instant on.
 * @param chunk no more samples at once than that.
 */
export function openPaths(
  rig: RigSetup,
  rateHz: number,
  seconds: number,
  volts: readonly ((t: number) => number)[],
  more: { settings?: Partial<Settings>; lost?: { atS: number; samples: number }; chunk?: number } = {},
): OpenPaths {
  const settings = { ...defaultSettings, ...more.settings };
  const speed = createSpeedColumns();
  const directions: DirectionChange[] = [];
  const motion = new Motion(rig, settings, rateHz, 0, speed, directions);
  const needed: readonly string[] = neededRoles(rig);
  const paths = rig.channels.map(
    (channel) =>
      new ChannelPath({
        channel,
        band: settings.band,
        sections: [],
        gainOfNoise: 1,
        rateHz,
        startIndex: 0,
        holdoffS: settings.holdoffS,
        missingPulses: channel.role === 'Z' ? 0 : rig.wheel.missingPulses,
        teethPerTurn: channel.role === 'Z' ? 1 : rig.wheel.pulsesPerTurn - rig.wheel.missingPulses,
        bands: [],
      }),
  );
  const lanes = paths
    .filter(({ channel }) => needed.includes(channel.role))
    .map((path) => ({ path, queue: path.queue, role: needed.indexOf(path.channel.role) }));
  const indexPath = paths.find(({ channel }) => channel.role === 'Z');
  const primary = lanes.find(({ role }) => role === 0)?.path;
  const watch = IndexWatch.of(indexPath, primary, motion, rateHz);
  const tick = samplesPerTick(rateHz);
  const lostAt = more.lost ? Math.round(more.lost.atS * rateHz) : Infinity;
  const samples = new Float64Array(chunkSamples);
  const end = Math.round(seconds * rateHz);
  for (let at = 0; at < end;) {
    if (at === lostAt) {
      at += more.lost!.samples;
      for (const path of paths) path.skipTo(at);
      motion.gap(lostAt / rateHz, at / rateHz, at);
    }
    const toLoss = lostAt > at ? lostAt - at : Infinity;
    const count = Math.min(more.chunk ?? chunkSamples, tick - (at % tick), toLoss, end - at);
    paths.forEach((path, c) => {
      for (let i = 0; i < count; i++) samples[i] = volts[c]!((at + i) / rateHz);
      path.advance(samples, 0, count, at);
    });
    at += count;
    mergeEdges(lanes, motion);
    if (at % tick === 0) {
      for (const path of paths) path.tick();
      watch?.tick();
    }
  }
  const speeds = Array.from({ length: speed.count }, (_, i) => ({ t: speed.t[i]!, rpm: speed.rpm[i]! }));
  return { motion, watch, paths, speeds, directions };
}
