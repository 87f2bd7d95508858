import { useState } from 'react';
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
import { useWide } from '@/client/theme/use-theme';

type ShelfFiltersProps = {
  shelf: ShelfFilter;
  /** Tags of the captures in sight. */
  tags: readonly string[];
};

/** Search in the words, and narrow by rig, tag and finding; on a phone those three stand behind a press. */
export function ShelfFilters({ shelf, tags }: ShelfFiltersProps) {
  const wide = useWide();
  const { filter, typed, setTyped, clear, active } = shelf;
  const narrowed = [filter.rigId, filter.tag, filter.finding].filter(Boolean).length;
  const [open, setOpen] = useState(narrowed > 0);
  return (
    <View {...({ role: 'search' } as object)} style={row}>
      <View style={{ flexGrow: 3, flexBasis: 200, minWidth: 0 }}>
        <TextField
          label="Search titles, tags and notes"
          kind="search"
          value={typed}
          onChange={setTyped}
          maxLength={200}
        />
      </View>
      {wide ? null : (
        <Button
          label={narrowed > 0 ? `Filter (${narrowed})` : 'Filter'}
          expanded={open}
          onPress={() => setOpen(!open)}
        />
      )}
      {wide || open ? <Narrow shelf={shelf} tags={tags} /> : null}
      {active ? <Button label="Clear" longLabel="Clear the filter" onPress={clear} /> : null}
    </View>
  );
}

function Narrow({ shelf, tags }: ShelfFiltersProps) {
  const rigs = useRigs();
  const { filter, set } = shelf;
  // The tag asked for stays in the list when no capture in sight has it.
  const allTags = filter.tag && !tags.includes(filter.tag) ? [filter.tag, ...tags] : tags;
  return (
    <>
      <Place>
        <Select
          label="Rig"
          value={filter.rigId ?? ''}
          options={[
            { value: '', label: 'All rigs' },
            ...(rigs.data ?? []).map((r) => ({ value: r.id, label: r.name })),
          ]}
          onChange={(rig) => set({ rig })}
        />
      </Place>
      <Place>
        <Select
          label="Tag"
          value={filter.tag ?? ''}
          options={[{ value: '', label: 'All tags' }, ...allTags.map((tag) => ({ value: tag, label: tag }))]}
          onChange={(tag) => set({ tag })}
        />
      </Place>
      <Place>
        <Select<FindingCode | ''>
          label="Finding"
          value={filter.finding ?? ''}
          options={[
            { value: '', label: 'All findings' },
            ...findingCodes.map((code) => ({ value: code, label: findingWords(code) })),
          ]}
          onChange={(finding) => set({ finding })}
        />
      </Place>
    </>
  );
}

function Place({ children }: { children: ReactNode }) {
  return <View style={{ flexGrow: 1, flexBasis: 140, minWidth: 0 }}>{children}</View>;
}

const row = { flexDirection: 'row', flexWrap: 'wrap', gap: space.m, alignItems: 'flex-end' } as const;
