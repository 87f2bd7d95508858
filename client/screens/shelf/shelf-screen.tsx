import { View } from 'react-native';
import type { Capture } from '@/server/contract';
import { Button } from '@/client/components/button';
import { Screen } from '@/client/components/screen';
import { EmptyState, Skeleton } from '@/client/components/states';
import { Text } from '@/client/components/text';
import { countText } from '@/client/drawings/count-text';
import { useCaptures } from '@/client/data/captures';
import { CaptureCard } from '@/client/screens/shelf/capture-card';
import { CapturesTable } from '@/client/screens/shelf/captures-table';
import { tagsOf } from '@/client/screens/shelf/capture-words';
import { ShelfFilters } from '@/client/screens/shelf/shelf-filters';
import { ShowMore } from '@/client/screens/shelf/show-more';
import { useShelfFilter } from '@/client/screens/shelf/use-shelf-filter';
import { ProblemState } from '@/client/screens/shared/problem-state';
import { useGo } from '@/client/screens/shared/use-go';
import { space } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';

/** All kept captures, newest first. */
export function ShelfScreen() {
  const shelf = useShelfFilter();
  const captures = useCaptures(shelf.filter);
  const items = captures.data?.pages.flatMap((page) => page.items) ?? [];
  const go = useGo();
  return (
    <Screen title="Shelf" below={<ShelfFilters shelf={shelf} tags={tagsOf(items)} />} width="full">
      {captures.isError && items.length === 0 ? (
        <ProblemState error={captures.error} what="the captures" onRetry={() => void captures.refetch()} />
      ) : captures.isPending ? (
        <Skeleton rows={4} height={120} label="Fetching the captures" />
      ) : items.length > 0 ? (
        <>
          <CaptureList captures={items} />
          <ShowMore
            more={captures.hasNextPage}
            busy={captures.isFetchingNextPage}
            failed={captures.isFetchNextPageError}
            onMore={() => void captures.fetchNextPage()}
          />
        </>
      ) : shelf.active ? (
        <EmptyState
          title="Nothing fits"
          message="No capture has all that the filter asks for. Loosen it, or clear it."
        >
          <Button label="Clear the filter" onPress={shelf.clear} />
        </EmptyState>
      ) : (
        <EmptyState
          title="Nothing kept yet"
          message="The last minutes of every rig are recorded all the time. Press Keep on Watch, and they come here to stay."
        >
          <Button label="Go to the rigs" kind="filled" onPress={() => go('/rigs')} />
        </EmptyState>
      )}
      {/* For those who do not see the list change while they type. */}
      <Text role="status" size="tiny" style={spokenOnly}>
        {captures.isFetching
          ? ''
          : captures.hasNextPage
            ? `${items.length} or more captures`
            : countText(items.length, 'capture')}
      </Text>
    </Screen>
  );
}

function CaptureList({ captures }: { captures: readonly Capture[] }) {
  const wide = useWide();
  if (wide) return <CapturesTable captures={captures} />;
  return (
    <View role="list" aria-label="Captures" style={{ gap: space.m }}>
      {captures.map((capture) => (
        <CaptureCard key={capture.id} capture={capture} />
      ))}
    </View>
  );
}

const spokenOnly = { position: 'absolute', width: 1, height: 1, overflow: 'hidden', opacity: 0 } as const;
