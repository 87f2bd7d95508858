import { Circle, G, Line, Path, Svg } from 'react-native-svg';
import { countText } from '@/client/drawings/count-text';
import { Drawing } from '@/client/drawings/figure';
import {
  arcPath,
  followsUpToTurnsPerS,
  polar,
  turnWords,
  wheelDrawing,
} from '@/client/drawings/wheel-geometry';
import type { WheelDrawing } from '@/client/drawings/wheel-geometry';
import { SvgText } from '@/client/drawings/svg-text';
import { useColours } from '@/client/theme/use-theme';
import { useReducedMotion } from '@/client/theme/use-reduced-motion';
import type { WheelFace as Face } from '@/signal/model';

type WheelFaceProps = {
  face: Face;
  /** Signed; null where not known. */
  rpm: number | null;
  direction: 'forward' | 'reverse' | 'stopped' | 'unknown';
  size: number;
  /** What a position is called, one and many. */
  nouns?: [one: string, many: string];
  /** A wheel that was, not one that turns: no angle is said of it. */
  past?: boolean;
};

/** One turn: every tooth at its angle, and the turn mark moving with the shaft. */
export function WheelFace({
  face,
  rpm,
  direction,
  size,
  nouns = ['tooth', 'teeth'],
  past = false,
}: WheelFaceProps) {
  const still = useReducedMotion();
  const drawing = wheelDrawing(face, size / 2 - 4);
  const missing = face.positions.filter((p) => p.missing).length;
  const words = past ? null : turnWords(rpm, face.angleDeg);
  const teeth = countText(face.positions.length - missing, ...nouns);
  const label = `Wheel with ${teeth}${missing ? ` and ${missing} missing` : ''}${words === null ? '' : `, ${words}`}. Spacing errors drawn ${drawing.scale} times as large.`;
  return (
    <Drawing label={label} height={size} style={{ width: size, alignSelf: 'center' }}>
      {() => (
        <Svg width={size} height={size}>
          <Teeth drawing={drawing} centre={size / 2} />
          <TurnMark
            rpm={rpm}
            direction={direction}
            angleDeg={still ? null : face.angleDeg}
            centre={size / 2}
            ring={drawing.ring}
          />
          <SvgText
            x={size / 2}
            y={size / 2 - (words === null ? 0 : 10)}
            anchor="middle"
            size={14}
            tone="scribe"
          >
            {teeth}
          </SvgText>
          {words === null ? null : (
            <SvgText x={size / 2} y={size / 2 + 10} anchor="middle">
              {words}
            </SvgText>
          )}
        </Svg>
      )}
    </Drawing>
  );
}

function Teeth({ drawing, centre }: { drawing: WheelDrawing; centre: number }) {
  const colours = useColours();
  const width = Math.min(
    5,
    Math.max(1, (2 * Math.PI * drawing.ring) / Math.max(drawing.marks.length, 1) / 3.5),
  );
  return (
    <G>
      {drawing.arcs.map(([from, to]) => (
        <Path
          key={from}
          d={arcPath(centre, drawing.ring, from, to)}
          fill="none"
          stroke={colours.scribeSoft}
          strokeWidth={1}
        />
      ))}
      {drawing.marks.map(({ index, angleDeg, kind, inner, outer }) => {
        if (kind === 'missing') return null;
        const a = polar(centre, inner, angleDeg);
        if (kind === 'unseen') {
          return (
            <Circle
              key={index}
              cx={a.x}
              cy={a.y}
              r={Math.min(4, width * 1.6)}
              fill="none"
              stroke={colours.warn}
              strokeWidth={1.5}
            />
          );
        }
        const b = polar(centre, outer, angleDeg);
        return (
          <Line key={index} x1={a.x} y1={a.y} x2={b.x} y2={b.y} stroke={colours.scribe} strokeWidth={width} />
        );
      })}
    </G>
  );
}

type TurnMarkProps = {
  rpm: number | null;
  direction: WheelFaceProps['direction'];
  angleDeg: number | null;
  centre: number;
  ring: number;
};

/** At the shaft's angle while the eye can follow; faster: a blurred arc that trails behind its head. */
function TurnMark({ rpm, direction, angleDeg, centre, ring }: TurnMarkProps) {
  const colours = useColours();
  const fast = rpm !== null && Math.abs(rpm) / 60 > followsUpToTurnsPerS;
  const radius = ring - 10;
  if (fast) {
    const sense = direction === 'reverse' ? -1 : 1;
    const known = direction === 'forward' || direction === 'reverse';
    return (
      <G>
        {Array.from({ length: 12 }, (_, i) => (
          <Path
            key={i}
            d={arcPath(
              centre,
              radius,
              sense * (known ? -15 * (i + 1) : 30 * i),
              sense * (known ? -15 * i : 30 * i + 14),
            )}
            fill="none"
            stroke={colours.dye}
            strokeWidth={3}
            strokeOpacity={known ? 1 - i / 12 : 0.6}
          />
        ))}
      </G>
    );
  }
  if (angleDeg === null) return null;
  const a = polar(centre, ring * 0.62, angleDeg);
  const b = polar(centre, ring - 4, angleDeg);
  return (
    <Line
      x1={a.x}
      y1={a.y}
      x2={b.x}
      y2={b.y}
      stroke={colours.dye}
      strokeWidth={3}
      strokeLinecap="square"
      strokeOpacity={rpm === null ? 0.4 : 1}
    />
  );
}
