import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { Screen } from '@/client/components/screen';
import { EmptyState, Skeleton } from '@/client/components/states';
import { useMay } from '@/client/data/app-data-context';
import { useRigs } from '@/client/data/rigs';
import { countText } from '@/client/drawings/count-text';
import { RigCard } from '@/client/screens/rigs/rig-card';
import { RigsTable } from '@/client/screens/rigs/rigs-table';
import { LinkBanner } from '@/client/screens/shared/link-banner';
import { ProblemState } from '@/client/screens/shared/problem-state';
import { useGo } from '@/client/screens/shared/use-go';
import { space } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';

/** All rigs, live. */
export function RigsScreen() {
  const rigs = useRigs();
  const may = useMay('engineer');
  const go = useGo();
  const count = rigs.data?.length ?? 0;
  const newRig = <Button label="New rig" icon="plus" kind="filled" onPress={() => go('/rigs/new')} />;
  return (
    <Screen
      title="Rigs"
      subtitle={count > 0 ? countText(count, 'rig') : undefined}
      actions={may && count > 0 ? newRig : null}
      banner={<LinkBanner />}
      width="full"
    >
      {rigs.data ? (
        count > 0 ? (
          <RigsList rigs={rigs.data} />
        ) : (
          <EmptyState
            title="No rigs yet"
            message={
              may
                ? 'A rig is a wheel, its sensors and a board. Describe one, and the next page gives the lines that send its first teeth.'
                : 'Engineers set rigs up. As soon as there is one, it stands here, live.'
            }
          >
            {may ? newRig : null}
          </EmptyState>
        )
      ) : rigs.isError ? (
        <ProblemState error={rigs.error} what="the rigs" onRetry={() => void rigs.refetch()} />
      ) : (
        <Skeleton rows={3} height={150} label="Fetching the rigs" />
      )}
    </Screen>
  );
}

function RigsList({ rigs }: { rigs: Parameters<typeof RigsTable>[0]['rigs'] }) {
  const wide = useWide();
  if (wide) return <RigsTable rigs={rigs} />;
  return (
    <View role="list" aria-label="Rigs" style={{ gap: space.m }}>
      {rigs.map((rig) => (
        <RigCard key={rig.id} rig={rig} />
      ))}
    </View>
  );
}
