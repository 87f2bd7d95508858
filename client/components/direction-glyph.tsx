import { Circle, Path, Polygon, Svg } from 'react-native-svg';
import { useColours } from '@/client/theme/use-theme';

export type ShownDirection = 'forward' | 'reverse' | 'stopped' | 'unknown';

/**
 * An arc over a shaft dot with a solid head. Stopped: the arc without a head and a bar. Unknown: the arc dashed, no
 * head, so that it claims no direction.
 */
export function DirectionGlyph({ direction, size = 32 }: { direction: ShownDirection; size?: number }) {
  const colours = useColours();
  const known = direction === 'forward' || direction === 'reverse';
  const colour = known ? colours[direction] : colours.still;
  return (
    <Svg width={size} height={size} viewBox="0 0 32 32" fill="none" aria-hidden>
      <Circle cx={16} cy={25.5} r={3} fill={colour} />
      {direction === 'forward' ? <Head colour={colour} /> : null}
      {direction === 'reverse' ? <Head colour={colour} mirrored /> : null}
      {direction === 'unknown' ? (
        <Path d="M4.5 20A11.5 11.5 0 0 1 27.5 20" stroke={colour} strokeWidth={2.6} strokeDasharray="4 3.6" />
      ) : null}
      {direction === 'stopped' ? (
        <Path d="M7 17H25" stroke={colour} strokeWidth={3.2} strokeLinecap="square" />
      ) : null}
    </Svg>
  );
}

function Head({ colour, mirrored }: { colour: string; mirrored?: boolean }) {
  const arc = mirrored ? 'M28 21C28 13 22.5 8.6 13 9.2' : 'M4 21C4 13 9.5 8.6 19 9.2';
  return (
    <>
      <Path d={arc} stroke={colour} strokeWidth={2.8} strokeLinecap="square" />
      <Polygon points={mirrored ? '4,9.6 14.5,3 13.5,16' : '28,9.6 17.5,3 18.5,16'} fill={colour} />
    </>
  );
}
