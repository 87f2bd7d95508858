import { useEffect, useMemo, useRef, useState } from 'react';
import type { Analysis } from '@/signal/model';
import { edgesOf, firstWindow } from '@/client/screens/replay/replay-data';
import {
  centreOn,
  clampWindow,
  follow,
  neighbourOf,
  panBy,
  reveal,
  sensibleRate,
  spanOf,
  zoomAbout,
} from '@/client/screens/replay/replay-window';
import type { Window } from '@/client/screens/replay/replay-window';

type Place = { window: Window; cursorS: number };
export type Replay = ReturnType<typeof useReplay>;

const leastSamples = 12;

/** Where in the capture one is, and the moves: everything that buttons, keys and fingers can do. */
export function useReplay(capture: { durationS: number; rateHz: number }, analysis: Analysis | null) {
  const { durationS, rateHz } = capture;
  const leastS = Math.min(durationS, leastSamples / rateHz);
  const [moved, setMoved] = useState<Place | null>(null);
  const [playing, setPlaying] = useState(false);
  const [rate, setRate] = useState<number | null>(null);
  const [signal, setSignal] = useState<'raw' | 'filtered'>('raw');
  const [focus, setFocus] = useState<string | null>(null);
  const edges = useMemo(() => (analysis ? edgesOf(analysis) : []), [analysis]);
  const instants = useMemo(() => edges.map((e) => e.t), [edges]);
  const start = useMemo((): Place => {
    if (analysis) return firstWindow(analysis, durationS);
    return { window: { fromS: 0, toS: Math.min(durationS, 0.5) }, cursorS: 0 };
  }, [analysis, durationS]);
  const place = moved ?? start;
  const playRate = rate ?? sensibleRate(spanOf(place.window));
  const atEnd = place.cursorS >= durationS;
  const move = (change: (now: Place) => Place) => setMoved((now) => change(now ?? start));

  usePlaying(playing, playRate, (byS) => {
    move(({ window, cursorS }) => {
      const next = Math.min(durationS, cursorS + byS);
      return { cursorS: next, window: follow(window, next, durationS) };
    });
    if (atEnd) setPlaying(false);
  });
  const within = (s: number) => Math.min(durationS, Math.max(0, s));
  return {
    ...place,
    durationS,
    playing,
    playRate,
    signal,
    focus,
    edges,
    setRate,
    setSignal,
    setFocus,
    togglePlay: () => {
      if (!playing && atEnd) move(({ window }) => ({ cursorS: 0, window: reveal(window, 0, durationS) }));
      setPlaying(!playing);
    },
    /** Puts the cursor somewhere; the window comes along where it must. */
    seek: (s: number) =>
      move(({ window }) => ({ cursorS: within(s), window: reveal(window, within(s), durationS) })),
    step: (byS: number) =>
      move(({ window, cursorS }) => ({
        cursorS: within(cursorS + byS),
        window: reveal(window, within(cursorS + byS), durationS),
      })),
    /** The middle of the window goes there, and the cursor with it. */
    centre: (s: number) =>
      move(({ window }) => ({ cursorS: within(s), window: centreOn(window, within(s), durationS) })),
    zoom: (factor: number, aboutS?: number) =>
      move(({ window, cursorS }) => {
        const seen = cursorS >= window.fromS && cursorS <= window.toS;
        const about = aboutS ?? (seen ? cursorS : (window.fromS + window.toS) / 2);
        return { cursorS, window: zoomAbout(window, factor, about, durationS, leastS) };
      }),
    pan: (byS: number) => move(({ window, cursorS }) => ({ cursorS, window: panBy(window, byS, durationS) })),
    /** Shows just that; the cursor stays unless it is sent somewhere. */
    show: (window: Window, s?: number) =>
      move(({ cursorS }) => ({
        cursorS: s === undefined ? cursorS : within(s),
        window: clampWindow(window, durationS, leastS),
      })),
    jump: (way: 1 | -1) => {
      const to = neighbourOf(instants, place.cursorS, way);
      if (to !== null) move(({ window }) => ({ cursorS: to, window: reveal(window, to, durationS) }));
    },
    hasEdge: (way: 1 | -1) => neighbourOf(instants, place.cursorS, way) !== null,
    canCloser: spanOf(place.window) > leastS * 1.001,
    canWider: spanOf(place.window) < durationS * 0.999,
  };
}

/** Calls `advance` once a drawn frame with the seconds of signal that went by. */
function usePlaying(playing: boolean, rate: number, advance: (byS: number) => void): void {
  const latest = useRef(advance);
  useEffect(() => {
    latest.current = advance;
  });
  useEffect(() => {
    if (!playing) return undefined;
    let before: number | null = null;
    let request = requestAnimationFrame(function tick(nowMs) {
      // A page that was hidden must not leap ahead when it comes back.
      if (before !== null) latest.current((Math.min(100, nowMs - before) / 1000) * rate);
      before = nowMs;
      request = requestAnimationFrame(tick);
    });
    return () => cancelAnimationFrame(request);
  }, [playing, rate]);
}
