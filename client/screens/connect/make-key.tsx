import { useState } from 'react';
import { View } from 'react-native';
import { rigKeyInput, type RigKeyCreated } from '@/server/contract';
import { Button } from '@/client/components/button';
import { Plate } from '@/client/components/plate';
import { WarnShape } from '@/client/components/shapes';
import { Text } from '@/client/components/text';
import { TextField } from '@/client/components/text-field';
import { asProblem } from '@/client/data/api-problem';
import { useMakeKey } from '@/client/data/keys';
import { CopyButton } from '@/client/screens/connect/copy-button';
import { space } from '@/client/theme/tokens';

type MakeKeyProps = {
  rigId: string;
  /** The rig has no key yet: making one is the thing to do. */
  first: boolean;
  onKey: (key: string | null) => void;
};

/** Makes a key and shows it this once. */
export function MakeKey({ rigId, first, onKey }: MakeKeyProps) {
  const [name, setName] = useState('');
  const [error, setError] = useState<string | null>(null);
  const [made, setMade] = useState<RigKeyCreated | null>(null);
  const make = useMakeKey(rigId);
  const makeNow = async () => {
    const read = rigKeyInput.safeParse({ name });
    if (!read.success)
      return setError('Give the key a name, of at most 80 characters: the board that gets it.');
    setError(null);
    try {
      const key = await make.mutateAsync(read.data.name);
      setMade(key);
      setName('');
      onKey(key.key);
    } catch (failure) {
      const problem = asProblem(failure);
      setError([problem.title, problem.detail].filter(Boolean).join('. '));
    }
  };
  const forget = () => {
    setMade(null);
    make.reset();
    onKey(null);
  };
  if (made) return <NewKey made={made} onDone={forget} />;
  return (
    <View style={{ gap: space.m }}>
      <TextField
        label="Name of the key"
        help="The board that gets it, so that it can be told from others later."
        value={name}
        onChange={setName}
        onSubmit={() => void makeNow()}
        error={error}
        maxLength={80}
      />
      <Button
        label="Make a key"
        kind={first ? 'filled' : 'outlined'}
        icon="key"
        busy={make.isPending}
        onPress={() => void makeNow()}
      />
    </View>
  );
}

function NewKey({ made, onDone }: { made: RigKeyCreated; onDone: () => void }) {
  return (
    <Plate edge="warn" raised role="group" label="The new key" style={{ gap: space.m }}>
      <View style={{ flexDirection: 'row', gap: space.s, alignItems: 'flex-start' }}>
        <View style={{ paddingTop: 3 }}>
          <WarnShape />
        </View>
        <Text weight="medium" style={{ flex: 1 }}>
          {made.name}: this key is shown once
        </Text>
      </View>
      <Text code size="small" label={`Key ${made.key}`}>
        {made.key}
      </Text>
      <Text size="small" tone="scribeSoft">
        The lines below hold it as long as it is shown. The hub does not store it: who loses it makes a new
        one. Who has it can send samples in the name of this rig.
      </Text>
      <View style={{ flexDirection: 'row', flexWrap: 'wrap', gap: space.m }}>
        <CopyButton label="Copy the key" text={made.key} main />
        <Button label="I have it" onPress={onDone} />
      </View>
    </Plate>
  );
}
