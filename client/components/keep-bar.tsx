import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { BareSelect } from '@/client/components/select';
import { Text } from '@/client/components/text';
import { keepChoices, keepWords, lookbackWords } from '@/client/components/keep-words';
import { size, space } from '@/client/theme/tokens';
import { useColours, useWide } from '@/client/theme/use-theme';

type KeepBarProps = {
  /** How far back can still be kept, s. */
  lookbackS: number;
  seconds: number;
  onSeconds: (seconds: number) => void;
  onKeep: (seconds: number) => void;
  busy: boolean;
  /** Why nothing can be kept now, else null. */
  blocked: string | null;
};

/** Within the thumb's reach, high enough for gloves. */
export function KeepBar({ lookbackS, seconds, onSeconds, onKeep, busy, blocked }: KeepBarProps) {
  const colours = useColours();
  const wide = useWide();
  const choices = keepChoices(lookbackS);
  const picked = choices.some((c) => c.seconds === seconds) ? seconds : choices[0]!.seconds;
  return (
    <View
      role="region"
      aria-label="Keep"
      style={{
        flexDirection: 'row',
        alignItems: 'center',
        gap: space.m,
        padding: wide ? 0 : space.l,
        paddingVertical: wide ? 0 : space.s,
        borderTopWidth: wide ? 0 : 1,
        borderTopColor: colours.hairline,
        backgroundColor: colours.ground,
      }}
    >
      <View style={{ width: wide ? 92 : 104 }}>
        <BareSelect
          label={`Seconds to keep, of ${lookbackWords(lookbackS)} lookback`}
          value={String(picked)}
          options={choices.map((c) => ({ value: String(c.seconds), label: c.label }))}
          onChange={(value) => onSeconds(Number(value))}
          height={wide ? size.button : size.target}
        />
        {wide ? null : (
          <Text size="tiny" tone="scribeSoft" figures style={{ textAlign: 'center', marginTop: 4 }}>
            of {lookbackWords(lookbackS)}
          </Text>
        )}
      </View>
      <Button
        kind="filled"
        tall={!wide}
        label={blocked ?? keepWords(picked, lookbackS)}
        disabled={blocked !== null}
        busy={busy}
        onPress={() => onKeep(picked)}
        style={{ flex: 1, minWidth: wide ? 196 : 0 }}
      />
    </View>
  );
}
