/**
 * The demo lab: Ottersund Kelp Gear, a firm that does not exist, builds a winch that hauls, rinses and spools kelp
 * lines. Each rig carries the setup and settings that the hub is told, and the physics that the hub is not told.
 */
import { lineHauler } from '@/simulator/demo-line-hauler';
import { rinsePump } from '@/simulator/demo-rinse-pump';
import { spoolGuide } from '@/simulator/demo-spool-guide';
import { createRig, type RigSpec } from '@/simulator/rig-model';
import type { RigBody, SettingsBody } from '@/simulator/setup-shape';
import { streamRig, type RunningStream, type Transport } from '@/simulator/stream';
import type { WireFormat } from '@/simulator/wire';

export type DemoRig = {
  name: string;
  /** Body of `POST /api/v1/rigs`. */
  rig: RigBody;
  /** Body of `POST /api/v1/rigs/:rigId/settings`. */
  settings: SettingsBody;
  spec: RigSpec;
  transport: Transport;
  format: WireFormat;
};

export const demoLabName = 'Ottersund Kelp Gear';

export const demoRigs: DemoRig[] = [
  { ...lineHauler, transport: 'ws', format: 'cbor' },
  { ...spoolGuide, transport: 'ws', format: 'cbor' },
  { ...rinsePump, transport: 'http', format: 'json' },
];

export type DemoRun = { stop(): Promise<void> };

/**
 * Streams the demo rigs that have a key to the hub at `baseUrl`, each with its own seed, until stopped.
 * `onNote` gets a line for people now and then; never a key.
 */
export function startDemoRigs(options: {
  baseUrl: string;
  keys: Record<string, string>;
  seed?: number;
  onNote?: (line: string) => void;
}): DemoRun {
  const running: RunningStream[] = [];
  demoRigs.forEach((demo, i) => {
    const key = options.keys[demo.name];
    if (key === undefined) return;
    running.push(
      streamRig({
        rig: createRig(demo.spec, (options.seed ?? 1) + i),
        baseUrl: options.baseUrl,
        key,
        transport: demo.transport,
        format: demo.format,
        blockS: 0.05,
        onEvent: (event) => {
          if (event.kind === 'ended') options.onNote?.(`${demo.name}: ${event.reason}`);
          if (event.kind === 'refused') options.onNote?.(`${demo.name}: refused, ${event.detail}`);
        },
      }),
    );
  });
  return {
    stop: async () => {
      await Promise.all(running.map((stream) => stream.stop()));
    },
  };
}
