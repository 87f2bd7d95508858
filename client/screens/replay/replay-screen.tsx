import { useState } from 'react';
import { useWindowDimensions } from 'react-native';
import { Confirm } from '@/client/components/confirm';
import { Screen } from '@/client/components/screen';
import { Loading } from '@/client/components/states';
import { useToast } from '@/client/components/toast';
import { useAnalysis } from '@/client/data/analysis';
import { asProblem } from '@/client/data/api-problem';
import { useMay, useUser } from '@/client/data/app-data-context';
import { useCapture, useDeleteCapture } from '@/client/data/captures';
import { useLaneSamples } from '@/client/data/lane-samples';
import { clipLevels } from '@/client/drawings/clip-levels';
import { EditSheet } from '@/client/screens/replay/edit-sheet';
import { laneOf } from '@/client/screens/replay/replay-data';
import { ReplayView } from '@/client/screens/replay/replay-view';
import { fetchFor } from '@/client/screens/replay/replay-window';
import { useReplay } from '@/client/screens/replay/use-replay';
import { ProblemState } from '@/client/screens/shared/problem-state';
import { useGo } from '@/client/screens/shared/use-go';
import { useWide } from '@/client/theme/use-theme';
import type { Capture } from '@/server/contract';

/** More columns than px, so that samples come as they are where there are about as many. */
const columnsPerPx = 1.8;

/** One kept capture, replayed. */
export function ReplayScreen({ captureId }: { captureId: string }) {
  const capture = useCapture(captureId);
  if (capture.data) return <LoadedReplay capture={capture.data} />;
  return (
    <Screen title="Capture" back={{ href: '/shelf' as never, label: 'Back to the Shelf' }}>
      {capture.error ? (
        <ProblemState error={capture.error} what="this capture" onRetry={() => void capture.refetch()} />
      ) : (
        <Loading label="Fetching the capture" />
      )}
    </Screen>
  );
}

function LoadedReplay({ capture }: { capture: Capture }) {
  const wide = useWide();
  const { width } = useWindowDimensions();
  const analysis = useAnalysis(capture.id);
  const replay = useReplay(capture, analysis.data ?? null);
  const fetch = fetchFor(replay.window, (wide ? width - 560 : width - 120) * columnsPerPx, capture.durationS);
  const samples = useLaneSamples(capture.id, capture.channels, { ...fetch, signal: replay.signal });
  const [sheet, setSheet] = useState<'edit' | 'delete' | null>(null);
  const deletion = useDeletion(capture);
  const mayEdit = useMay('engineer');

  const lanes = capture.channels.map((name, i) =>
    laneOf(
      name,
      samples[i]?.samples,
      analysis.data?.channels[name],
      clipLevels(capture.rig.channels.find((c) => c.name === name)),
      replay.window,
    ),
  );
  const failed = samples.find((s) => s.error)?.error;
  const empty = samples.some((s) => !s.samples);
  const note = failed
    ? `The signal could not be fetched. ${asProblem(failed).detail}`
    : empty
      ? 'Fetching the signal'
      : null;
  const analysisState = analysis.error ? (
    <ProblemState error={analysis.error} what="the analysis" onRetry={() => void analysis.refetch()} />
  ) : (
    <Loading label="Counting every edge" />
  );
  return (
    <>
      <ReplayView
        capture={capture}
        analysis={analysis.data ?? null}
        analysisState={analysisState}
        lanes={lanes}
        replay={replay}
        note={note}
        onEdit={mayEdit ? () => setSheet('edit') : null}
        onDelete={deletion.allowed ? () => setSheet('delete') : null}
      />
      {sheet === 'edit' ? <EditSheet capture={capture} onClose={() => setSheet(null)} /> : null}
      <Confirm
        title="Delete this capture?"
        message="Its samples, tags and note go for good. That it was deleted, and by whom, stays in the audit trail."
        action="Delete"
        open={sheet === 'delete'}
        busy={deletion.busy}
        onConfirm={deletion.run}
        onClose={() => setSheet(null)}
      />
    </>
  );
}

/** An engineer deletes what is their own, an admin anything; the hub checks it again. */
function useDeletion(capture: Capture) {
  const user = useUser();
  const engineer = useMay('engineer');
  const admin = useMay('admin');
  const own = user !== null && [user.id, user.name, user.email].includes(capture.createdBy);
  const remove = useDeleteCapture();
  const toast = useToast();
  const go = useGo();
  const run = () =>
    remove.mutate(capture.id, {
      onSuccess: () => {
        toast({ text: `"${capture.title}" is deleted.` });
        go('/shelf');
      },
      onError: (failure) =>
        toast({ text: `Not deleted. ${asProblem(failure).detail || asProblem(failure).title}` }),
    });
  return { allowed: admin || (engineer && own), busy: remove.isPending, run };
}
