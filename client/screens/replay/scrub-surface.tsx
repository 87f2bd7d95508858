import { useEffect, useId, useRef } from 'react';
import type { ReactNode } from 'react';
import { View } from 'react-native';
import { Hidden } from '@/client/components/hidden';
import { keyMove, pinchMove, wheelFactor } from '@/client/screens/replay/gestures';
import type { Point } from '@/client/screens/replay/gestures';
import { spanOf } from '@/client/screens/replay/replay-window';
import type { Replay } from '@/client/screens/replay/use-replay';

type Moves = {
  /** One finger or the mouse, pressed or dragged, at px from the left. */
  onPoint: (x: number, widthPx: number) => void;
  onPinch?: (move: { factor: number; aboutX: number; panPx: number }, widthPx: number) => void;
  onWheel?: (factor: number, panPx: number, x: number, widthPx: number) => void;
};

type ScrubSurfaceProps = Moves & {
  label: string;
  valueText: string;
  /** What the drawing shows, in words: nothing inside of a slider is read out. */
  description: string;
  replay: Replay;
  children: ReactNode;
  grow?: boolean;
};

type PointerLike = {
  pointerId: number;
  clientX: number;
  clientY: number;
  currentTarget: unknown;
  button: number;
};

/** A drawing that is a slider too: press, drag, pinch, wheel, and every move by keys. */
export function ScrubSurface(props: ScrubSurfaceProps) {
  const { label, valueText, description, replay, children, grow, ...moves } = props;
  const descriptionId = useId();
  const place = useRef<View>(null);
  const pointers = useRef(new Map<number, Point>());
  useWheel(place, moves.onWheel);

  const at = (event: PointerLike): Point => {
    const box = (event.currentTarget as HTMLElement).getBoundingClientRect();
    return { x: event.clientX - box.left, y: event.clientY - box.top };
  };
  const widthOf = (event: PointerLike) => (event.currentTarget as HTMLElement).clientWidth;
  const down = (event: PointerLike) => {
    if (event.button !== 0) return;
    (event.currentTarget as HTMLElement).setPointerCapture(event.pointerId);
    pointers.current.set(event.pointerId, at(event));
    if (pointers.current.size === 1) moves.onPoint(at(event).x, widthOf(event));
  };
  const move = (event: PointerLike) => {
    const before = [...pointers.current.values()];
    if (!pointers.current.has(event.pointerId)) return;
    pointers.current.set(event.pointerId, at(event));
    const after = [...pointers.current.values()];
    if (after.length === 2 && moves.onPinch)
      moves.onPinch(pinchMove(before as [Point, Point], after as [Point, Point]), widthOf(event));
    else if (after.length === 1) moves.onPoint(at(event).x, widthOf(event));
  };
  const up = (event: PointerLike) => void pointers.current.delete(event.pointerId);

  const slider = (
    <View
      ref={place}
      role="slider"
      tabIndex={0}
      aria-label={label}
      aria-valuemin={0}
      aria-valuemax={Math.round(replay.durationS * 1000)}
      aria-valuenow={Math.round(replay.cursorS * 1000)}
      aria-valuetext={valueText}
      {...({
        onPointerDown: down,
        onPointerMove: move,
        onPointerUp: up,
        onPointerCancel: up,
        onKeyDown: keys(replay),
        'aria-describedby': descriptionId,
      } as object)}
      style={[surface, grow ? { flex: 1, minHeight: 0 } : null]}
    >
      {children}
    </View>
  );
  return (
    <>
      {slider}
      <Hidden id={descriptionId}>{description}</Hidden>
    </>
  );
}

// The page still scrolls up and down under a finger; sideways and pinching are ours.
const surface = { touchAction: 'pan-y', cursor: 'crosshair', userSelect: 'none' } as object;

function keys(replay: Replay) {
  return (event: {
    key: string;
    shiftKey: boolean;
    ctrlKey: boolean;
    metaKey: boolean;
    preventDefault: () => void;
  }) => {
    if (event.ctrlKey || event.metaKey) return;
    const move = keyMove(event.key, event.shiftKey);
    if (!move) return;
    event.preventDefault();
    if (move.kind === 'step') replay.step(move.spans * spanOf(replay.window));
    else if (move.kind === 'jump') replay.jump(move.way);
    else if (move.kind === 'zoom') replay.zoom(move.factor);
    else if (move.kind === 'to') replay.seek(move.end === 'start' ? 0 : replay.durationS);
    else replay.togglePlay();
  };
}

/** React listens to wheels passively; a zoom must keep the page from scrolling. */
function useWheel(place: React.RefObject<View | null>, onWheel: Moves['onWheel']): void {
  const latest = useRef(onWheel);
  useEffect(() => {
    latest.current = onWheel;
  });
  useEffect(() => {
    const element = place.current as unknown as HTMLElement | null;
    if (!element) return undefined;
    const listen = (event: WheelEvent) => {
      const zooms = event.ctrlKey || event.metaKey || event.altKey;
      const pans = event.shiftKey || Math.abs(event.deltaX) > Math.abs(event.deltaY);
      // A plain wheel scrolls the page, as everywhere.
      if (!latest.current || (!zooms && !pans)) return;
      event.preventDefault();
      const x = event.clientX - element.getBoundingClientRect().left;
      const panPx = zooms ? 0 : event.deltaX || event.deltaY;
      latest.current(zooms ? wheelFactor(event.deltaY) : 1, panPx, x, element.clientWidth);
    };
    element.addEventListener('wheel', listen, { passive: false });
    return () => element.removeEventListener('wheel', listen);
  }, [place]);
}
