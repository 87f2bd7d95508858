import { useState } from 'react';
import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { DirectionGlyph } from '@/client/components/direction-glyph';
import type { ShownDirection } from '@/client/components/direction-glyph';
import { FindingCard } from '@/client/components/finding-card';
import { Icon } from '@/client/components/icon';
import type { IconName } from '@/client/components/icon';
import { Mark } from '@/client/components/mark';
import { Plate } from '@/client/components/plate';
import { Screen } from '@/client/components/screen';
import { SchemeChoice } from '@/client/components/scheme-switch';
import { Select } from '@/client/components/select';
import { EmptyState, ErrorState, OfflineBanner, Skeleton } from '@/client/components/states';
import { StatusWord } from '@/client/components/status-word';
import { Switch } from '@/client/components/switch';
import { TagEditor } from '@/client/components/tag-chips';
import { Text } from '@/client/components/text';
import { TextField } from '@/client/components/text-field';
import { useToast } from '@/client/components/toast';
import { lostSamples, weakTooth } from '@/client/screens/gallery/demo-things';
import { space } from '@/client/theme/tokens';

const directions: ShownDirection[] = ['forward', 'reverse', 'stopped', 'unknown'];
const icons: IconName[] = [
  'rigs',
  'shelf',
  'inbox',
  'more',
  'back',
  'next',
  'down',
  'up',
  'close',
  'plus',
  'minus',
  'play',
  'pause',
  'edgeBack',
  'edgeOn',
  'copy',
  'check',
  'search',
  'table',
  'sun',
  'moon',
  'expand',
  'pencil',
  'trash',
  'person',
  'upload',
  'download',
  'key',
];

/** Every component in its states. */
export function PartsGallery() {
  const toast = useToast();
  const [text, setText] = useState('');
  const [on, setOn] = useState(true);
  const [tags, setTags] = useState(['reversal']);
  return (
    <Screen
      title="Gallery"
      subtitle="Components with made-up content"
      banner={
        <OfflineBanner message="No link to the hub. Trying again by itself." onRetry={() => undefined} />
      }
    >
      <Plate style={{ gap: space.m }}>
        <View style={row}>
          <Mark size={64} label="Turnmark" />
          {directions.map((d) => (
            <View key={d} style={{ alignItems: 'center' }}>
              <DirectionGlyph direction={d} size={48} />
              <Text size="tiny">{d}</Text>
            </View>
          ))}
        </View>
        <View style={row}>
          {icons.map((name) => (
            <Icon key={name} name={name} />
          ))}
        </View>
        <View style={row}>
          {(['good', 'note', 'warn', 'fault', 'unknown'] as const).map((s) => (
            <StatusWord key={s} status={s} word={s} />
          ))}
        </View>
      </Plate>
      <View style={row}>
        <Button
          label="Filled"
          kind="filled"
          onPress={() => toast({ text: 'Kept.', actionLabel: 'Undo', onAction: () => undefined })}
        />
        <Button label="Outlined" onPress={() => undefined} />
        <Button label="Delete" kind="destructive" icon="trash" onPress={() => undefined} />
        <Button label="Quiet" kind="quiet" onPress={() => undefined} />
        <Button label="Off" disabled onPress={() => undefined} />
        <Button label="Busy" busy onPress={() => undefined} />
      </View>
      <Plate style={{ gap: space.l }}>
        <TextField label="Name" value={text} onChange={setText} help="As it stands on the bench." />
        <TextField
          label="Cutoff"
          kind="number"
          unit="Hz"
          value="12000"
          onChange={() => undefined}
          error="Above half the sample rate of 20 kS/s."
        />
        <Select
          label="Sensing"
          value="a"
          onChange={() => undefined}
          options={[{ value: 'a', label: 'One channel' }]}
        />
        <Switch label="Active low" help="The output falls when a tooth comes." value={on} onChange={setOn} />
        <SchemeChoice />
        <TagEditor tags={tags} onChange={setTags} known={['gap 1.2 mm']} />
      </Plate>
      <FindingCard finding={weakTooth} when="9 s" onShow={() => undefined} />
      <FindingCard
        finding={{ ...lostSamples, outcome: 'cannot-tell' }}
        follows={[weakTooth]}
        onShow={() => undefined}
      />
      <ErrorState
        title="The hub does not answer"
        message="Nothing is lost. Check the network, then try again."
        onRetry={() => undefined}
      />
      <EmptyState
        title="Nothing on the Shelf yet"
        message="Keep the last seconds of a rig and they stand here."
      >
        <Button label="Go to the rigs" onPress={() => undefined} />
      </EmptyState>
      <Skeleton />
    </Screen>
  );
}

const row = { flexDirection: 'row', flexWrap: 'wrap', gap: space.m, alignItems: 'center' } as const;
