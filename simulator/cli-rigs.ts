/** The rigs and faults that the command line knows by name. */
import { demoLabName, demoRigs, type DemoRig } from '@/simulator/demo-lab';
import type { Fault } from '@/simulator/faults';
import type { RigSpec } from '@/simulator/rig-model';

/** By name, upper and lower case alike, `line-hauler` for `Line hauler`. */
export function findDemoRig(name: string): DemoRig | undefined {
  const plain = (text: string) =>
    text
      .toLowerCase()
      .replace(/[\s_-]+/g, ' ')
      .trim();
  return demoRigs.find((demo) => plain(demo.name) === plain(name));
}

export function listRigs(): string {
  const lines = [demoLabName];
  for (const { name, spec, rig } of demoRigs) {
    const channels = spec.channels.map((channel) => channel.name).join(', ');
    lines.push('', `${name}: ${rig.sensing}, channels ${channels}, ${spec.rateHz} samples a second`);
    for (const fault of spec.faults) {
      lines.push(`  ${fault.beginS} s to ${fault.endS} s of ${spec.loopS} s: ${fault.kind}`);
    }
  }
  return lines.join('\n');
}

type Maker = (span: { beginS: number; endS: number; channel?: string }, spec: RigSpec) => Fault;

const makers: Record<string, Maker> = {
  'weak-tooth': (span) => ({ kind: 'weak-tooth', ...span, position: 7, strength: 0.4 }),
  'missing-tooth': (span) => ({ kind: 'missing-tooth', ...span, position: 3 }),
  'uneven-pitch': (span) => ({ kind: 'uneven-pitch', ...span, shifts: { 2: 0.12 } }),
  burr: (span) => ({ kind: 'burr', ...span, at: 2, strength: 1, width: 0.25 }),
  'run-out': (span, spec) => ({ kind: 'run-out', ...span, addMm: 0.3 * spec.gapMm, easeS: 2 }),
  'gap-wide': (span, spec) => ({ kind: 'gap', ...span, addMm: spec.gapMm }),
  'gap-narrow': (span, spec) => ({ kind: 'gap', ...span, addMm: -0.8 * spec.gapMm }),
  clipping: (span) => ({ kind: 'clipping', ...span, highV: 2.2 }),
  hum: (span) => ({ kind: 'hum', ...span, amplitudeV: 0.15, hz: 50 }),
  noise: (span) => ({ kind: 'noise', ...span, rmsV: 0.1 }),
  'offset-drift': (span) => ({ kind: 'offset-drift', ...span, offsetV: 0.4, easeS: 10 }),
  'dead-channel': (span) => ({ kind: 'dead-channel', ...span, levelV: 0.1 }),
  spikes: (span) => ({ kind: 'spikes', ...span, perS: 8, heightV: 1.5, widthS: 0.0003 }),
  freeze: (span) => ({ kind: 'freeze', ...span, perS: 2, forS: 0.01 }),
  'inverted-line': (span) => ({ kind: 'inverted-line', ...span }),
  'weak-pull-up': (span) => ({ kind: 'weak-pull-up', ...span, ohm: 220_000 }),
  'points-drift': (span) => ({ kind: 'points-drift', ...span, addMt: 3, easeS: 5 }),
  bounce: (span) => ({ kind: 'bounce', ...span, bounceS: 0.0005 }),
  phase: (span, spec) => ({ kind: 'phase', channel: spec.channels.at(-1)?.name, ...span, degrees: 40 }),
  'supply-ripple': (span) => ({ kind: 'supply-ripple', ...span, amplitudeV: 0.2, hz: 100 }),
};

/** Adds the fault named as `name`, `name:channel` or `name@from-to`. Throws with a sentence for people. */
export function withFault(spec: RigSpec, text: string): RigSpec {
  const match = /^([a-z-]+)(?::([^@]+))?(?:@([\d.]+)-([\d.]+))?$/.exec(text);
  const make = match ? makers[match[1] as string] : undefined;
  if (!match || !make) throw new Error(`--fault: "${text}" is none of ${Object.keys(makers).join(', ')}`);
  const channel = match[2];
  if (channel !== undefined && !spec.channels.some(({ name }) => name === channel)) {
    throw new Error(`--fault: there is no channel "${channel}"`);
  }
  const span = { beginS: Number(match[3] ?? 0), endS: Number(match[4] ?? Infinity) };
  if (!(span.endS > span.beginS)) throw new Error(`--fault: "${text}" ends before it begins`);
  return {
    ...spec,
    faults: [...spec.faults, make(channel === undefined ? span : { ...span, channel }, spec)],
  };
}
