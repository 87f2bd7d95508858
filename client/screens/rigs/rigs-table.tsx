import { Link } from 'expo-router';
import type { Href } from 'expo-router';
import { View } from 'react-native';
import type { Rig } from '@/server/contract';
import { Plate } from '@/client/components/plate';
import { StatusWord } from '@/client/components/status-word';
import { Table, type Column } from '@/client/components/table';
import { Text } from '@/client/components/text';
import { MiniRibbon, miniWish } from '@/client/screens/rigs/mini-ribbon';
import { SpeedWord, stateWords } from '@/client/screens/rigs/speed-word';
import { useRigNow } from '@/client/screens/rigs/use-rig-now';
import { rigPath } from '@/client/screens/shared/use-go';
import { size } from '@/client/theme/tokens';

const columns: Column<Rig>[] = [
  { title: 'Rig', cell: (rig) => <NameCell rig={rig} /> },
  { title: 'Speed', cell: (rig) => <SpeedCell rig={rig} /> },
  { title: 'Last teeth', cell: (rig) => <RibbonCell rig={rig} /> },
  { title: 'Findings', cell: (rig) => <HealthCell rig={rig} /> },
  { title: 'State', cell: (rig) => <StateCell rig={rig} /> },
];

/** All rigs on a wide screen, live, a row each. Cells ask for the same rig; the live store asks the hub once. */
export function RigsTable({ rigs }: { rigs: readonly Rig[] }) {
  return (
    <Plate flush>
      <Table label="Rigs" columns={columns} rows={rigs} keyOf={(rig) => rig.id} />
    </Plate>
  );
}

function NameCell({ rig }: { rig: Rig }) {
  return (
    <Link
      href={rigPath.watch(rig.id) as Href}
      style={{ display: 'flex', alignItems: 'center', minHeight: size.target, maxWidth: 300 } as object}
    >
      <Text weight="medium" tone="dye" lines={3}>
        {rig.name}
      </Text>
    </Link>
  );
}

function SpeedCell({ rig }: { rig: Rig }) {
  const { saying } = useRigNow(rig, null);
  return (
    <View style={{ minWidth: 150 }}>
      <SpeedWord saying={saying} size="lead" />
    </View>
  );
}

function RibbonCell({ rig }: { rig: Rig }) {
  const { view, isLive } = useRigNow(rig, miniWish);
  return (
    <View style={{ width: 300 }}>
      <MiniRibbon rig={rig} view={view} height={24 + 16 * Math.min(rig.channels.length, 4)} live={isLive} />
    </View>
  );
}

function HealthCell({ rig }: { rig: Rig }) {
  const { health } = useRigNow(rig, null);
  return (
    <View style={{ minWidth: 130 }}>
      <StatusWord status={health.status} word={health.word} />
    </View>
  );
}

function StateCell({ rig }: { rig: Rig }) {
  const { saying, lastBlock } = useRigNow(rig, null);
  return (
    <View style={{ width: 200 }}>
      <Text size="small">{stateWords(saying)}</Text>
      <Text size="small" tone="scribeSoft" figures>
        {lastBlock}
      </Text>
    </View>
  );
}
