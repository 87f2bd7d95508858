import type { ComponentProps, ReactNode } from 'react';
import { KeepBar } from '@/client/components/keep-bar';
import { Plate } from '@/client/components/plate';
import { StatusWord } from '@/client/components/status-word';
import { Text } from '@/client/components/text';
import { useToast } from '@/client/components/toast';
import type { LiveRigView } from '@/client/data/use-live';
import type { FindingsList } from '@/client/screens/watch/findings-list';
import { positionNouns } from '@/client/drawings/count-text';
import { rateText, ribbonDataOf, sparkPoints, teethWords } from '@/client/screens/watch/live-data';
import type { RibbonControlsProps } from '@/client/screens/watch/ribbon-controls';
import type { RibbonPlate } from '@/client/screens/watch/ribbon-plate';
import { spanText } from '@/client/screens/watch/span';
import type { SpeedPlate } from '@/client/screens/watch/speed-plate';
import type { WatchControls } from '@/client/screens/watch/use-watch-controls';
import { clockText } from '@/client/screens/watch/watch-model';
import type { WatchNow } from '@/client/screens/watch/watch-model';
import type { WheelPlate } from '@/client/screens/watch/wheel-plate';
import { changePreferences } from '@/client/theme/preferences';
import { usePreferences } from '@/client/theme/use-theme';
import type { LiveFrame, Rig } from '@/server/contract';
import type { SpeedMethod } from '@/signal/model';

export type WatchViewProps = {
  rig: Rig;
  view: LiveRigView;
  now: WatchNow;
  controls: WatchControls;
  /** How speed is made; null while not known. */
  method: SpeedMethod | null;
  /** null: the role does not allow it. */
  keeping: { busy: boolean; keep: (seconds: number) => void } | null;
  tabs?: ReactNode;
  banner?: ReactNode;
};

const methodWords: Record<SpeedMethod, string> = {
  tooth: 'over the last tooth',
  turn: 'over the last turn',
  window: 'over the window',
};

/** What each part of Watch is given; the two layouts only place them. */
export function useWatchParts({ rig, view, now, controls, method, keeping }: WatchViewProps) {
  const toast = useToast();
  const { keepSeconds } = usePreferences();
  const frame = view.frame;
  const live: LiveFrame['live'] | null = frame?.live ?? null;
  const drawn = controls.held ?? frame;
  const data =
    drawn?.ribbon && drawn.ribbon.lanes.length > 0 ? ribbonDataOf(drawn.ribbon, rig.channels) : null;
  const rate = live?.rates.declaredHz ?? null;
  const state = !now.isLive ? (live?.state === 'waiting' ? 'no stream yet' : 'not streaming') : 'streaming';
  const subtitle = [
    state,
    `${rig.channels.length} ${rig.channels.length === 1 ? 'channel' : 'channels'}`,
    rate === null ? '' : rateText(rate),
    live ? (live.settingsVersion === 0 ? 'first settings' : `settings ${live.settingsVersion}`) : '',
  ];
  const [, positions] = positionNouns(rig.sensing);
  const teeth = teethWords(rig.wheel.pulsesPerTurn - rig.wheel.missingPulses, rig.sensing);
  const speed: ComponentProps<typeof SpeedPlate> = {
    now,
    method: method ? `${methodWords[method]} · ${teeth}` : teeth,
    points: sparkPoints(view.speedHistory),
    onFar: () => controls.setFar(true),
  };
  const ribbon: ComponentProps<typeof RibbonPlate> = {
    data,
    positions,
    anchor: drawn?.ribbon?.anchor ?? 'now',
    heldText: controls.held
      ? `held at ${clockText(instantOf(controls.held))}`
      : now.isLive
        ? null
        : data
          ? 'not live'
          : null,
    held: controls.held !== null,
    filtered: drawn?.ribbon?.signal === 'filtered',
    isLive: now.isLive,
    focus: controls.focus,
    onFocus: controls.setFocus,
    markS: controls.markS,
    emptyText:
      live?.state === 'waiting'
        ? 'The signal stands here once the board sends its first block.'
        : 'No signal to draw yet.',
  };
  const buttons: RibbonControlsProps = {
    held: controls.held !== null,
    onHold: () => controls.hold(frame),
    spanLabel: spanText(controls.span, rig.sensing),
    positions,
    unit: controls.span.unit,
    onUnit: () => controls.unit(drawn),
    onShorter: controls.step(-1),
    onLonger: controls.step(1),
    anchor: controls.span.anchor,
    onAnchor: controls.anchor,
    data,
  };
  const findings: ComponentProps<typeof FindingsList> = {
    findings: live?.findings ?? [],
    isLive: now.isLive,
    unjudged: now.health.status === 'unknown' || Boolean(live?.setupProblem),
    streamS: live?.streamS ?? null,
    onShow: (finding) => {
      const seen = controls.show(finding, frame, rig.wheel.pulsesPerTurn);
      if (!seen)
        toast({ text: 'That lies too far back for the live picture. Keep it and look at it in replay.' });
    },
  };
  const face = drawn?.wheelFace ?? null;
  const wheel: Omit<ComponentProps<typeof WheelPlate>, 'size'> | null =
    face && live && face.positions.length > 0
      ? { face, live: (controls.held ?? frame)!.live, rig, isPast: !now.isLive && !controls.held }
      : null;
  const keepBar: ComponentProps<typeof KeepBar> | null = keeping && {
    lookbackS: live?.lookbackS ?? 0,
    seconds: keepSeconds,
    onSeconds: (keepSeconds) => changePreferences({ keepSeconds }),
    onKeep: keeping.keep,
    busy: keeping.busy,
    blocked: !live
      ? 'Waiting for the hub'
      : view.connection.status === 'waiting'
        ? 'No link to the hub'
        : live.lookbackS <= 0
          ? 'Nothing to keep yet'
          : null,
  };
  const problem = live?.setupProblem ? <SetupProblem text={live.setupProblem} /> : null;
  return {
    isLive: now.isLive,
    subtitle: subtitle.filter(Boolean).join(' · '),
    live,
    speed,
    ribbon,
    controls: buttons,
    findings,
    wheel,
    keepBar,
    problem,
  };
}

function SetupProblem({ text }: { text: string }) {
  return (
    <Plate edge="fault" role="region" label="Settings problem">
      <StatusWord status="fault" word="These settings cannot be run on this stream" size="body" />
      <Text size="small" tone="scribeSoft">
        {text} Samples are recorded all the same.
      </Text>
    </Plate>
  );
}

/** When the right edge of a frame's picture was, on the wall clock. */
function instantOf({ at, live, ribbon }: LiveFrame): string {
  const agoS = live.streamS === null || ribbon === null ? 0 : Math.max(0, live.streamS - ribbon.toS);
  return new Date(Date.parse(at) - 1000 * agoS).toISOString();
}
