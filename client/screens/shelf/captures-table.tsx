import { Link } from 'expo-router';
import type { Href } from 'expo-router';
import { View } from 'react-native';
import type { Capture } from '@/server/contract';
import { Plate } from '@/client/components/plate';
import { StatusWord } from '@/client/components/status-word';
import { Table, type Column } from '@/client/components/table';
import { TagChips } from '@/client/components/tag-chips';
import { Text } from '@/client/components/text';
import { captureHealth, lengthWords, titleOf } from '@/client/screens/shelf/capture-words';
import { Instant } from '@/client/screens/shared/instant';
import { capturePath } from '@/client/screens/shared/use-go';
import { size } from '@/client/theme/tokens';

const columns: Column<Capture>[] = [
  {
    title: 'Capture',
    cell: (capture) => (
      <Link
        href={capturePath(capture.id) as Href}
        style={{ display: 'flex', alignItems: 'center', minHeight: size.target, maxWidth: 320 } as object}
      >
        <Text weight="medium" tone="dye" lines={3}>
          {titleOf(capture)}
        </Text>
      </Link>
    ),
  },
  {
    title: 'Rig',
    cell: ({ rig }) => (
      <Text size="small" lines={3} style={{ maxWidth: 200 }}>
        {rig.name}
      </Text>
    ),
  },
  {
    title: 'Findings',
    cell: ({ findings }) => (
      <View style={{ minWidth: 150 }}>
        <StatusWord {...captureHealth(findings)} />
      </View>
    ),
  },
  {
    title: 'Tags',
    cell: ({ tags }) => (
      <View style={{ maxWidth: 260 }}>
        <TagChips tags={tags} />
      </View>
    ),
  },
  { title: 'Kept by', cell: ({ createdBy }) => <Text size="small">{createdBy}</Text> },
  { title: 'Started', cell: ({ startedAt }) => <Instant at={startedAt} /> },
  {
    title: 'Length',
    numeric: true,
    cell: ({ durationS }) => (
      <Text size="small" figures>
        {lengthWords(durationS)}
      </Text>
    ),
  },
];

/** The Shelf on a wide screen. */
export function CapturesTable({ captures }: { captures: readonly Capture[] }) {
  return (
    <Plate flush>
      <Table label="Captures" columns={columns} rows={captures} keyOf={(c) => c.id} />
    </Plate>
  );
}
