import { useState } from 'react';
import { Pressable, View } from 'react-native';
import { Button } from '@/client/components/button';
import { Icon } from '@/client/components/icon';
import { Text } from '@/client/components/text';
import { TextField } from '@/client/components/text-field';
import { size, space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

export function TagChips({ tags, label = 'Tags' }: { tags: readonly string[]; label?: string }) {
  const colours = useColours();
  if (tags.length === 0) return null;
  return (
    <View role="list" aria-label={label} style={{ flexDirection: 'row', flexWrap: 'wrap', gap: space.xs }}>
      {tags.map((tag) => (
        <View
          key={tag}
          role="listitem"
          style={{
            borderWidth: 1,
            borderColor: colours.hairline,
            paddingHorizontal: space.s,
            paddingVertical: 2,
            maxWidth: '100%',
          }}
        >
          <Text size="small" tone="scribeSoft">
            {tag}
          </Text>
        </View>
      ))}
    </View>
  );
}

type TagEditorProps = {
  tags: readonly string[];
  onChange: (tags: string[]) => void;
  /** Tags used before, offered for one press. */
  known?: readonly string[];
};

/** Type and press Add, or press a tag that was used before; a press on a tag takes it off. */
export function TagEditor({ tags, onChange, known = [] }: TagEditorProps) {
  const [typed, setTyped] = useState('');
  const add = (tag: string) => {
    const clean = tag.trim().slice(0, 40);
    setTyped('');
    if (clean && !tags.includes(clean) && tags.length < 20) onChange([...tags, clean]);
  };
  const offered = known.filter((tag) => !tags.includes(tag)).slice(0, 8);
  return (
    <View style={{ gap: space.s }}>
      <View style={{ flexDirection: 'row', alignItems: 'flex-end', gap: space.s }}>
        <View style={{ flex: 1, minWidth: 0 }}>
          <TextField
            label="Tags"
            optional
            value={typed}
            onChange={setTyped}
            onSubmit={() => add(typed)}
            maxLength={40}
          />
        </View>
        <Button label="Add" longLabel="Add tag" disabled={!typed.trim()} onPress={() => add(typed)} />
      </View>
      <View style={{ flexDirection: 'row', flexWrap: 'wrap', gap: space.s }}>
        {tags.map((tag) => (
          <Chip
            key={tag}
            text={tag}
            on
            label={`Take off tag ${tag}`}
            onPress={() => onChange(tags.filter((t) => t !== tag))}
          />
        ))}
        {offered.map((tag) => (
          <Chip key={tag} text={tag} label={`Add tag ${tag}`} onPress={() => add(tag)} />
        ))}
      </View>
    </View>
  );
}

export function Chip({
  text,
  label,
  on,
  onPress,
}: {
  text: string;
  label: string;
  on?: boolean;
  onPress: () => void;
}) {
  const colours = useColours();
  return (
    <Pressable
      role="button"
      aria-label={label}
      onPress={onPress}
      style={{
        minHeight: size.target,
        maxWidth: '100%',
        flexDirection: 'row',
        alignItems: 'center',
        gap: space.xs,
        paddingHorizontal: space.m,
        borderWidth: 1,
        borderStyle: on ? 'solid' : 'dashed',
        borderColor: on ? colours.dye : colours.scribeSoft,
      }}
    >
      <Text size="small" tone={on ? 'dye' : 'scribeSoft'} style={{ flexShrink: 1 }}>
        {text}
      </Text>
      <Icon name={on ? 'close' : 'plus'} size={16} tone={on ? 'dye' : 'scribeSoft'} />
    </Pressable>
  );
}
