import { Circle, Path, Svg } from 'react-native-svg';
import type { ColourName } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

/** The product's mark: a ring, a stroke straddling its rim at half past one, two tooth notches. */
export function Mark({
  size = 32,
  tone = 'dye',
  label,
}: {
  size?: number;
  tone?: ColourName;
  label?: string;
}) {
  const stroke = { stroke: useColours()[tone], strokeWidth: 1.75, strokeLinecap: 'square' as const };
  return (
    <Svg
      width={size}
      height={size}
      viewBox="0 0 24 24"
      fill="none"
      {...(label ? { role: 'img', 'aria-label': label } : { 'aria-hidden': true })}
    >
      <Circle cx={12} cy={12.5} r={7.2} {...stroke} />
      <Path d="M15.6 8.9 19.6 4.9" {...stroke} />
      <Path d="M4.4 15.2 2.6 15.9" {...stroke} />
      <Path d="M9.4 19.8 8.8 21.6" {...stroke} />
    </Svg>
  );
}
