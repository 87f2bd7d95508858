import { Pressable, View } from 'react-native';
import { Text } from '@/client/components/text';
import { steps } from '@/client/screens/rig-setup/steps';
import { size, space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

type StepBarProps = {
  current: number;
  /** Any step may be chosen: all of them have been filled in before. */
  free: boolean;
  onChoose: (step: number) => void;
};

/** Where one is among the steps; those before can be gone back to. */
export function StepBar({ current, free, onChoose }: StepBarProps) {
  const colours = useColours();
  return (
    <View role="list" aria-label="Steps" style={{ flexDirection: 'row', gap: space.xs }}>
      {steps.map(({ id, title }, i) => {
        const tone = i === current ? 'scribe' : 'scribeSoft';
        return (
          <View key={id} role="listitem" style={{ flex: 1 }}>
            <Pressable
              role="button"
              disabled={!free && i > current}
              aria-disabled={!free && i > current}
              {...(i === current ? ({ 'aria-current': 'step' } as object) : {})}
              aria-label={`Step ${i + 1}: ${title}`}
              onPress={() => onChoose(i)}
              style={{
                minHeight: size.target,
                justifyContent: 'center',
                borderTopWidth: 3,
                borderTopColor: i <= current ? colours.dye : colours.hairline,
              }}
            >
              <Text size="small" weight={i === current ? 'medium' : 'regular'} tone={tone} lines={1}>
                {title}
              </Text>
            </Pressable>
          </View>
        );
      })}
    </View>
  );
}
