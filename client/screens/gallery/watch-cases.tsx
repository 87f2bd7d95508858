import { useEffect, useState } from 'react';
import { AppShell } from '@/client/components/app-shell';
import { Tabs } from '@/client/components/tabs';
import type { LiveRigView } from '@/client/data/use-live';
import { demoFrame } from '@/client/screens/gallery/demo-frame';
import { demoRig, lostSamples, weakTooth } from '@/client/screens/gallery/demo-things';
import { FarView } from '@/client/screens/watch/far-view';
import { useWatchControls } from '@/client/screens/watch/use-watch-controls';
import { watchNow } from '@/client/screens/watch/watch-model';
import { WatchView } from '@/client/screens/watch/watch-view';
import type { Live, Rig } from '@/server/contract';

type WatchCase = {
  rig?: Partial<Rig>;
  frame?: Parameters<typeof demoFrame>[0] extends infer O ? Partial<O> : never;
  live?: Partial<Live>;
  stale?: boolean;
  empty?: boolean;
};

const longName = 'Second prototype of the vent winch on the long bench beside the door, new bracket';

export const watchCases: Record<string, WatchCase> = {
  usual: { frame: { findings: [weakTooth] } },
  gap: { frame: { findings: [weakTooth, lostSamples], gapTeethAgo: 3, span: 9, columns: 900 } },
  good: { frame: { weakTooth: null } },
  reverse: { frame: { rpm: -62.4, weakTooth: null } },
  single: { rig: { sensing: 'single', name: longName }, frame: { channels: ['A'], findings: [weakTooth] } },
  four: { rig: { sensing: 'three-hall' }, frame: { channels: ['U', 'V', 'W', 'supply'], weakTooth: null } },
  stopped: {
    live: { state: 'stopped', speedRpm: 0, speedAtMostRpm: 0.6, sinceLastEdgeS: 12.4, direction: 'stopped' },
  },
  bound: { live: { speedRpm: 40, speedAtMostRpm: 40, sinceLastEdgeS: 0.5 } },
  unknown: { live: { state: 'unknown', speedRpm: null, speedAtMostRpm: 40, direction: 'unknown' } },
  silent: { live: { state: 'silent', speedRpm: null, direction: 'unknown', findings: [lostSamples] } },
  waiting: { empty: true },
  setup: { live: { setupProblem: 'The cutoff of 12000 Hz is above half the sample rate.' } },
};

/** Watch with made-up frames, one case of its many. */
export function WatchGallery({ name, moving }: { name: string; moving: boolean }) {
  const { rig: rigChange, frame: options, live, stale = false, empty = false } = watchCases[name] ?? {};
  const atS = useClock(moving);
  const controls = useWatchControls();
  const rig = demoRig(rigChange);
  const frame = demoFrame({ atS, ...options });
  const shown = empty
    ? {
        ...frame,
        ribbon: null,
        wheelFace: null,
        live: {
          ...frame.live,
          state: 'waiting' as const,
          speedRpm: null,
          lookbackS: 0,
          lastBlockAt: null,
          findings: [],
          margin: null,
          channels: [],
          turns: null,
          phaseDeg: null,
          rates: { declaredHz: null, arrivingHz: null, toothHz: null },
        },
      }
    : { ...frame, live: { ...frame.live, ...live } };
  const nowMs = 1e12;
  const view: LiveRigView = {
    frame: shown,
    speedHistory: empty ? null : (frame.speedHistory ?? null),
    receivedAtMs: nowMs,
    stale,
    gone: false,
    connection: { status: 'live' },
  };
  const now = watchNow(rig, view, nowMs);
  const tabs = ['Watch', 'Setup', 'Connect'].map((label) => ({
    label,
    href: '/gallery' as never,
    current: label === 'Watch',
  }));
  return (
    <AppShell>
      <WatchView
        rig={rig}
        view={view}
        now={now}
        controls={controls}
        method="turn"
        keeping={{ busy: false, keep: () => undefined }}
        tabs={<Tabs label="Pages of the rig" tabs={tabs} />}
      />
      <FarView open={controls.far} rigName={rig.name} now={now} onClose={() => controls.setFar(false)} />
    </AppShell>
  );
}

function useClock(moving: boolean): number {
  const [atS, setAtS] = useState(5);
  useEffect(() => {
    if (!moving) return undefined;
    const timer = setInterval(() => setAtS((s) => s + 0.04), 40);
    return () => clearInterval(timer);
  }, [moving]);
  return atS;
}
