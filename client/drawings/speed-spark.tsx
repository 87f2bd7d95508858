import { View } from 'react-native';
import { Line, Path, Svg } from 'react-native-svg';
import { Text } from '@/client/components/text';
import { Drawing } from '@/client/drawings/figure';
import { sparkRange, speedExtremes, speedPath } from '@/client/drawings/speed-line';
import type { SpeedPoint } from '@/client/drawings/speed-line';
import { rpmText } from '@/client/drawings/speed-words';
import { space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

export const sparkSeconds = 60;

/** Speed of the last minute, now at the right; low and high written, so that the line needs no axis. */
export function SpeedSpark({ points, height = 48 }: { points: readonly SpeedPoint[]; height?: number }) {
  const colours = useColours();
  const extremes = speedExtremes(points);
  const words = extremes
    ? [`${sparkSeconds} s · low ${sparkNumber(extremes.low)}`, `high ${sparkNumber(extremes.high)}`]
    : [`${sparkSeconds} s · no speed known`, ''];
  return (
    <View style={{ gap: space.xs }}>
      <Drawing label={`Speed of the last ${words.join(', ')}`} height={height}>
        {({ width }) => {
          const range = sparkRange(extremes ?? { low: 0, high: 1 });
          const y = (rpm: number) => 3 + ((range.high - rpm) / (range.high - range.low)) * (height - 8);
          const x = (t: number) => width + (t / sparkSeconds) * width;
          const zeroShown = range.low < 0 && range.high > 0;
          return (
            <Svg width={width} height={height}>
              <Line
                x1={0}
                x2={width}
                y1={height - 0.5}
                y2={height - 0.5}
                stroke={colours.hairline}
                strokeWidth={1}
              />
              {zeroShown ? (
                <Line
                  x1={0}
                  x2={width}
                  y1={y(0)}
                  y2={y(0)}
                  stroke={colours.hairline}
                  strokeWidth={1}
                  strokeDasharray="3 3"
                />
              ) : null}
              <Path
                d={speedPath(points, x, y)}
                fill="none"
                stroke={colours.scribe}
                strokeWidth={1.6}
                strokeLinejoin="round"
                strokeLinecap="round"
              />
            </Svg>
          );
        }}
      </Drawing>
      <View style={{ flexDirection: 'row', justifyContent: 'space-between' }}>
        {words.map((words_) => (
          <Text key={words_} size="tiny" tone="scribeSoft" figures>
            {words_}
          </Text>
        ))}
      </View>
    </View>
  );
}

/** Decimals only where they say something. */
function sparkNumber(rpm: number): string {
  return Math.abs(rpm) >= 100 ? rpmText(Math.round(rpm)).replace('.0', '') : rpmText(rpm);
}
