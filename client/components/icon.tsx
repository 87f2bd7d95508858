import { Circle, Path, Svg } from 'react-native-svg';
import type { ColourName } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

/** Drawn by hand on a grid of 24, stroke 1.75, square caps. */
const strokes = {
  back: ['M15 5 8 12 15 19'],
  down: ['M6 9.5 12 15.5 18 9.5'],
  up: ['M6 14.5 12 8.5 18 14.5'],
  next: ['M9 5 16 12 9 19'],
  close: ['M6 6 18 18', 'M18 6 6 18'],
  plus: ['M12 5V19', 'M5 12H19'],
  minus: ['M5 12H19'],
  play: ['M8 5.5V18.5L18.5 12Z'],
  pause: ['M8.5 5.5V18.5', 'M15.5 5.5V18.5'],
  edgeBack: ['M6 6V18', 'M18 6.5V17.5L9.5 12Z'],
  edgeOn: ['M18 6V18', 'M6 6.5V17.5L14.5 12Z'],
  copy: ['M9 9H19V20H9Z', 'M15 6V4H5V15H6.5'],
  check: ['M5 12.5 10 17.5 19 7'],
  search: ['M15.5 15.5 20 20'],
  table: ['M4 5H20V19H4Z', 'M4 10H20', 'M10 10V19'],
  sun: [
    'M12 3V4.5',
    'M12 19.5V21',
    'M3 12H4.5',
    'M19.5 12H21',
    'M5.6 5.6 6.7 6.7',
    'M17.3 17.3 18.4 18.4',
    'M18.4 5.6 17.3 6.7',
    'M6.7 17.3 5.6 18.4',
  ],
  moon: ['M19 14.5A7.8 7.8 0 1 1 9.5 5 6.4 6.4 0 0 0 19 14.5Z'],
  expand: ['M4 9V4H9', 'M15 4H20V9', 'M20 15V20H15', 'M9 20H4V15'],
  hold: ['M6 4V20', 'M10 8H20', 'M10 16H20'],
  pencil: ['M4.5 19.5 5.5 15.5 16 5 19 8 8.5 18.5Z'],
  trash: ['M5 7H19', 'M9.5 7V4.5H14.5V7', 'M7 7 7.8 19.5H16.2L17 7'],
  person: ['M4.5 20C5.5 15.5 8.5 14 12 14S18.5 15.5 19.5 20'],
  upload: ['M12 15.5V4.5', 'M7 9 12 4.5 17 9', 'M5 15V19.5H19V15'],
  download: ['M12 4.5V15.5', 'M7 11 12 15.5 17 11', 'M5 15V19.5H19V15'],
  key: ['M11.5 12.5 19.5 4.5', 'M16 8 18.5 10.5'],
  rigs: ['M15.6 8.9 19.6 4.9', 'M4.4 15.2 2.6 15.9', 'M9.4 19.8 8.8 21.6'],
  shelf: [
    'M3.5 11H20.5',
    'M3.5 20H20.5',
    'M6 11V7.5H9V11',
    'M9 11V4.5H12.5V11',
    'M14.5 11V7.5H17.5V11',
    'M7 20V15.5H10.5V20',
    'M14 20V16.5H18V20',
  ],
  inbox: ['M4 5H20V19H4Z', 'M4 13.5H8.5L10 16H14L15.5 13.5H20'],
  more: [],
} as const;

export type IconName = keyof typeof strokes;

const rings: Partial<Record<IconName, [x: number, y: number, r: number, filled?: boolean][]>> = {
  search: [[10.5, 10.5, 6]],
  sun: [[12, 12, 4]],
  person: [[12, 8, 4]],
  key: [[8.5, 15.5, 4.2]],
  rigs: [[12, 12.5, 7.2]],
  more: [
    [5.5, 12, 1.1, true],
    [12, 12, 1.1, true],
    [18.5, 12, 1.1, true],
  ],
};

type IconProps = { name: IconName; size?: number; tone?: ColourName };

/** Decoration: whatever holds it carries the name. */
export function Icon({ name, size = 24, tone = 'scribe' }: IconProps) {
  const colour = useColours()[tone];
  return (
    <Svg width={size} height={size} viewBox="0 0 24 24" fill="none" aria-hidden>
      {strokes[name].map((d) => (
        <Path
          key={d}
          d={d}
          stroke={colour}
          strokeWidth={1.75}
          strokeLinecap="square"
          strokeLinejoin="miter"
        />
      ))}
      {(rings[name] ?? []).map(([x, y, r, filled]) => (
        <Circle
          key={x}
          cx={x}
          cy={y}
          r={r}
          stroke={colour}
          strokeWidth={filled ? 0 : 1.75}
          fill={filled ? colour : 'none'}
        />
      ))}
    </Svg>
  );
}
