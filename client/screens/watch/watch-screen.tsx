import { useWindowDimensions } from 'react-native';
import { Screen } from '@/client/components/screen';
import { EmptyState, Loading } from '@/client/components/states';
import { useRig } from '@/client/data/rigs';
import { useSettings } from '@/client/data/settings';
import { useLiveRig } from '@/client/data/use-live';
import { useNow } from '@/client/data/use-now';
import { LinkBanner } from '@/client/screens/shared/link-banner';
import { ProblemState } from '@/client/screens/shared/problem-state';
import { RigTabs } from '@/client/screens/shared/rig-tabs';
import { CautionSheet } from '@/client/screens/watch/caution';
import { FarView } from '@/client/screens/watch/far-view';
import { wishOf } from '@/client/screens/watch/span';
import { useKeeping } from '@/client/screens/watch/use-keeping';
import { useWatchControls } from '@/client/screens/watch/use-watch-controls';
import { watchNow } from '@/client/screens/watch/watch-model';
import { WatchView } from '@/client/screens/watch/watch-view';
import { useWide } from '@/client/theme/use-theme';
import type { Rig } from '@/server/contract';
import { defaultSettings } from '@/signal/model';

/** More columns than px, so that samples come as they are where there are about as many. */
const columnsPerPx = 1.8;

/** A rig's live page. */
export function WatchScreen({ rigId }: { rigId: string }) {
  const rig = useRig(rigId);
  const back = { href: '/rigs' as never, label: 'Back to rigs' };
  if (rig.data) return <LiveWatch rig={rig.data} />;
  return (
    <Screen title="Rig" back={back}>
      {rig.error ? (
        <ProblemState error={rig.error} what="this rig" onRetry={() => void rig.refetch()} />
      ) : (
        <Loading label="Fetching the rig" />
      )}
    </Screen>
  );
}

function LiveWatch({ rig }: { rig: Rig }) {
  const wide = useWide();
  const { width } = useWindowDimensions();
  const controls = useWatchControls();
  const view = useLiveRig(rig.id, {
    ribbon: wishOf(controls.span, (wide ? width - 880 : width - 120) * columnsPerPx, controls.aroundS),
    detail: true,
  });
  controls.arrived(view.frame);
  const nowMs = useNow(250);
  const settings = useSettings(rig.id);
  const keeping = useKeeping(rig.id);
  const now = watchNow(rig, view, nowMs);
  if (view.gone) {
    return (
      <Screen title={rig.name} back={{ href: '/rigs' as never, label: 'Back to rigs' }}>
        <EmptyState title="This rig was deleted" message="Its captures stay on the Shelf." />
      </Screen>
    );
  }
  const method = settings.data
    ? (settings.data.items[0]?.speed.method ?? defaultSettings.speed.method)
    : null;
  return (
    <>
      <WatchView
        rig={rig}
        view={view}
        now={now}
        controls={controls}
        method={method}
        keeping={keeping.allowed ? keeping : null}
        tabs={<RigTabs rigId={rig.id} current="watch" />}
        banner={<LinkBanner />}
      />
      <FarView open={controls.far} rigName={rig.name} now={now} onClose={() => controls.setFar(false)} />
      <CautionSheet />
      {keeping.sheet}
    </>
  );
}
