import { useState } from 'react';
import type { LiveFrame } from '@/server/contract';
import type { Finding } from '@/signal/model';
import { canStep, firstSpan, stepSpan, switchUnit } from '@/client/screens/watch/span';
import type { Span } from '@/client/screens/watch/span';

/** Faults of the wheel come once a turn: a whole turn must be in sight to see them. */
const oncePerTurn = new Set([
  'missing-tooth',
  'weak-swing',
  'uneven-teeth',
  'run-out',
  'extra-pulse',
  'duty-shift',
]);
/** How far back the hub still holds the signal tooth by tooth, s; a little less, since the answer takes a while. */
const oldestS = 18;

export type WatchControls = ReturnType<typeof useWatchControls>;

/** What the one at the bench has chosen for the picture. */
export function useWatchControls() {
  const [span, setSpan] = useState<Span>(firstSpan);
  const [held, setHeld] = useState<LiveFrame | null>(null);
  const [focus, setFocus] = useState<string | null>(null);
  const [markS, setMarkS] = useState<number | null>(null);
  const [far, setFar] = useState(false);
  /** Stream time that was asked for and has not come yet. */
  const [aroundS, setAroundS] = useState<number | null>(null);

  const shown = (frame: LiveFrame | null) => {
    const ribbon = frame?.ribbon;
    return ribbon ? ribbon.toS - ribbon.fromS : null;
  };
  return {
    span,
    held,
    focus,
    markS,
    far,
    aroundS,
    setFar,
    setFocus,
    /** Call while rendering: the picture that was asked for is held as soon as it comes. */
    arrived: (frame: LiveFrame | null) => {
      const ribbon = frame?.ribbon;
      if (aroundS === null || !ribbon || aroundS < ribbon.fromS || aroundS > ribbon.toS) return;
      setHeld(frame);
      setAroundS(null);
    },
    hold: (frame: LiveFrame | null) => {
      setAroundS(null);
      setHeld(held ? null : frame);
      if (held) setMarkS(null);
    },
    step: (way: 1 | -1) => (canStep(span, way) ? () => setSpan(stepSpan(span, way)) : null),
    unit: (frame: LiveFrame | null) => setSpan(switchUnit(span, shown(frame))),
    anchor: () => setSpan({ ...span, anchor: span.anchor === 'edge' ? 'now' : 'edge' }),
    /** Lane and stretch in which a finding can be seen. False: it lies too far back for the live picture. */
    show: (finding: Finding, frame: LiveFrame | null, pulsesPerTurn: number): boolean => {
      const ribbon = frame?.ribbon;
      const streamS = frame?.live.streamS ?? null;
      if (finding.channel) setFocus(finding.channel);
      setMarkS(finding.at);
      if (ribbon && finding.at >= ribbon.fromS && finding.at <= ribbon.toS) {
        setHeld(frame);
        return true;
      }
      if (finding.to === null && !oncePerTurn.has(finding.code)) {
        // It goes on: what is on the screen now shows it.
        setMarkS(null);
        setHeld(frame);
        return true;
      }
      setHeld(null);
      if (finding.to === null) {
        setMarkS(null);
        setSpan({ ...span, unit: 'teeth', teeth: Math.min(200, pulsesPerTurn + 2), anchor: 'edge' });
        return true;
      }
      if (streamS === null || streamS - finding.at > oldestS) return false;
      setAroundS(finding.at);
      return true;
    },
  };
}
