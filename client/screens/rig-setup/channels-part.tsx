import { useFieldArray, useFormContext } from 'react-hook-form';
import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { Text } from '@/client/components/text';
import { ChannelFields } from '@/client/screens/rig-setup/channel-fields';
import { emptyChannel, type RigDraft } from '@/client/screens/rig-setup/draft';
import { freeName, mostChannels } from '@/client/screens/rig-setup/roles';
import { space } from '@/client/theme/tokens';

/** One plate a channel. */
export function ChannelsPart() {
  const { control, getValues, formState } = useFormContext<RigDraft>();
  const { fields, append, remove } = useFieldArray({ control, name: 'channels' });
  const problem = formState.errors.channels?.root?.message;
  const add = () => {
    const channels = getValues('channels');
    const role = channels.some((c) => c.role === 'Z') ? 'aux' : 'Z';
    append({ ...(channels[0] ?? emptyChannel('A', 'A')), name: freeName(role, channels), role });
  };
  return (
    <View style={{ gap: space.l }}>
      {fields.map((field, i) => (
        <ChannelFields key={field.id} index={i} onRemove={fields.length > 1 ? () => remove(i) : null} />
      ))}
      {problem ? (
        <Text size="small" tone="fault" role="alert">
          {problem}
        </Text>
      ) : null}
      {fields.length < mostChannels ? <Button label="Add a channel" icon="plus" onPress={add} /> : null}
    </View>
  );
}
