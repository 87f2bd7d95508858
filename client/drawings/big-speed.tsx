import { View } from 'react-native';
import { Text, plainFigures } from '@/client/components/text';
import { useSize } from '@/client/drawings/use-size';
import type { SpeedSaying } from '@/client/drawings/speed-words';
import { space, weights } from '@/client/theme/tokens';
import type { ColourName } from '@/client/theme/tokens';

type BigSpeedProps = {
  saying: SpeedSaying;
  /** Largest size of the figures, px; they shrink to fit the width. */
  most?: number;
};

/** The number without slashed zero, `rpm` small after it; or a word, as loud as a fault where the speed is not live. */
export function BigSpeed({ saying, most = 72 }: BigSpeedProps) {
  const [size, onLayout] = useSize();
  const { big, loud } = saying;
  const number = big.kind === 'number';
  const px = Math.min(
    most * (number ? 1 : 0.78),
    fontSizeToFit(big.text, (size?.width ?? 280) - (number ? most * 0.62 : 0)),
  );
  const tone: ColourName = loud ? 'fault' : number ? 'scribe' : 'still';
  return (
    <View
      onLayout={onLayout}
      style={{
        flexDirection: 'row',
        alignItems: 'baseline',
        gap: Math.max(space.s, most * 0.07),
        minHeight: most * 1.06,
        width: '100%',
      }}
    >
      <Text
        weight="bold"
        tone={tone}
        lines={1}
        style={[
          plainFigures,
          { fontSize: px, lineHeight: most * 1.06, fontFamily: weights.bold, letterSpacing: -px * 0.02 },
        ]}
      >
        {big.text}
      </Text>
      {number ? (
        <Text tone="scribeSoft" style={{ fontSize: Math.max(16, most * 0.28), lineHeight: most * 0.4 }}>
          rpm
        </Text>
      ) : null}
    </View>
  );
}

/** Bold figures are about 0.66 em wide, points and signs less. */
function fontSizeToFit(text: string, widthPx: number): number {
  const ems = [...text].reduce((sum, c) => sum + (c === '.' ? 0.3 : c === ' ' ? 0.28 : 0.66), 0);
  return Math.max(24, widthPx / Math.max(ems, 1));
}
