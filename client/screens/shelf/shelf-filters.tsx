import type { ReactNode } from 'react';
import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { Select } from '@/client/components/select';
import { TextField } from '@/client/components/text-field';
import { useRigs } from '@/client/data/rigs';
import { findingCodes, type FindingCode } from '@/signal/model';
import { findingWords } from '@/client/screens/shelf/capture-words';
import type { ShelfFilter } from '@/client/screens/shelf/use-shelf-filter';
import { space } from '@/client/theme/tokens';

type ShelfFiltersProps = {
  shelf: ShelfFilter;
  /** Tags of the captures in sight. */
  tags: readonly string[];
};

/** Search in the words, and narrow by rig, tag and finding. */
export function ShelfFilters({ shelf, tags }: ShelfFiltersProps) {
  const rigs = useRigs();
  const { filter, typed, setTyped, set, clear, active } = shelf;
  const allTags = filter.tag && !tags.includes(filter.tag) ? [filter.tag, ...tags] : tags;
  const named = (value: string) => ({ value, label: value });
  return (
    <View
      {...({ role: 'search' } as object)}
      style={{ flexDirection: 'row', flexWrap: 'wrap', gap: space.m, alignItems: 'flex-end' }}
    >
      <View style={{ flexGrow: 3, flexBasis: 260, minWidth: 0 }}>
        <TextField
          label="Search in titles, tags and notes"
          optional
          kind="search"
          value={typed}
          onChange={setTyped}
          maxLength={200}
        />
      </View>
      <Narrow>
        <Select
          label="Rig"
          value={filter.rigId ?? ''}
          options={[
            { value: '', label: 'All rigs' },
            ...(rigs.data ?? []).map((r) => ({ value: r.id, label: r.name })),
          ]}
          onChange={(rig) => set({ rig })}
        />
      </Narrow>
      <Narrow>
        <Select
          label="Tag"
          value={filter.tag ?? ''}
          options={[{ value: '', label: 'All tags' }, ...allTags.map(named)]}
          onChange={(tag) => set({ tag })}
        />
      </Narrow>
      <Narrow>
        <Select<FindingCode | ''>
          label="Finding"
          value={filter.finding ?? ''}
          options={[
            { value: '', label: 'All findings' },
            ...findingCodes.map((code) => ({ value: code, label: findingWords(code) })),
          ]}
          onChange={(finding) => set({ finding })}
        />
      </Narrow>
      {active ? <Button label="Clear" longLabel="Clear the filter" onPress={clear} /> : null}
    </View>
  );
}

function Narrow({ children }: { children: ReactNode }) {
  return <View style={{ flexGrow: 1, flexBasis: 140, minWidth: 0 }}>{children}</View>;
}
