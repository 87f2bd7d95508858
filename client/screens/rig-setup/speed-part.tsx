import { Controller, useFormContext } from 'react-hook-form';
import { View } from 'react-native';
import { Segmented } from '@/client/components/segmented';
import type { RigDraft } from '@/client/screens/rig-setup/draft';
import { FormNumber } from '@/client/screens/rig-setup/form-fields';
import { Pair } from '@/client/screens/rig-setup/pair';
import { space } from '@/client/theme/tokens';

const directions = [
  { value: 'either', label: 'Either way' },
  { value: 'forward', label: 'Forward' },
  { value: 'reverse', label: 'Reverse' },
] as const;

/** What the shaft is meant to do, and how fast the board looks at it. */
export function SpeedPart() {
  const { control } = useFormContext<RigDraft>();
  return (
    <View style={{ gap: space.l }}>
      <Controller
        control={control}
        name="expectedDirection"
        render={({ field }) => (
          <Segmented
            label="Expected direction"
            value={field.value}
            options={directions}
            onChange={field.onChange}
          />
        )}
      />
      <Pair least={200}>
        <FormNumber name="ratedRpm" label="Rated speed of the shaft" unit="rpm" optional />
        <FormNumber
          name="sampleRateHz"
          label="Samples a second"
          optional
          help="Of each channel. Only for the figures here: the board says its own."
        />
      </Pair>
    </View>
  );
}
