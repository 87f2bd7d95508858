import { Circle, Path, Polygon, Svg } from 'react-native-svg';
import type { ColourName } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

/** Moderate: a triangle. */
export function WarnShape({ size = 18 }: { size?: number }) {
  return <Solid size={size} tone="warn" points="12,3.5 22,21 2,21" />;
}

/** Grave: an octagon. */
export function FaultShape({ size = 18 }: { size?: number }) {
  return <Solid size={size} tone="fault" points="8,2.5 16,2.5 21.5,8 21.5,16 16,21.5 8,21.5 2.5,16 2.5,8" />;
}

/** Worth knowing: a hollow square on its corner. */
export function NoteShape({ size = 18 }: { size?: number }) {
  const colour = useColours().scribeSoft;
  return (
    <Svg width={size} height={size} viewBox="0 0 24 24" aria-hidden>
      <Polygon points="12,3 21,12 12,21 3,12" fill="none" stroke={colour} strokeWidth={2.5} />
    </Svg>
  );
}

/** Nothing found: a tick. */
export function GoodShape({ size = 18 }: { size?: number }) {
  const colour = useColours().good;
  return (
    <Svg width={size} height={size} viewBox="0 0 24 24" aria-hidden>
      <Path d="M4 12.5 9.5 18 20 6.5" fill="none" stroke={colour} strokeWidth={3} strokeLinecap="square" />
    </Svg>
  );
}

/** Not known: a hollow ring. */
export function UnknownShape({ size = 18 }: { size?: number }) {
  const colour = useColours().still;
  return (
    <Svg width={size} height={size} viewBox="0 0 24 24" aria-hidden>
      <Circle cx={12} cy={12} r={8} fill="none" stroke={colour} strokeWidth={2.5} strokeDasharray="5 4" />
    </Svg>
  );
}

export function SeverityShape({ severity, size }: { severity: 'note' | 'warn' | 'fault'; size?: number }) {
  if (severity === 'fault') return <FaultShape size={size} />;
  return severity === 'warn' ? <WarnShape size={size} /> : <NoteShape size={size} />;
}

function Solid({ size, tone, points }: { size: number; tone: ColourName; points: string }) {
  const colour = useColours()[tone];
  return (
    <Svg width={size} height={size} viewBox="0 0 24 24" aria-hidden>
      <Polygon points={points} fill={colour} />
    </Svg>
  );
}
