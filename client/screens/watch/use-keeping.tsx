import { useState } from 'react';
import type { ReactNode } from 'react';
import { useToast } from '@/client/components/toast';
import { asProblem } from '@/client/data/api-problem';
import { useMay } from '@/client/data/app-data-context';
import { useCaptures, useDeleteCapture, useEditCapture, useKeep } from '@/client/data/captures';
import { KeepSheet } from '@/client/screens/watch/keep-sheet';
import type { KeptWords } from '@/client/screens/watch/keep-sheet';
import { capturePath, useGo } from '@/client/screens/shared/use-go';
import type { Capture } from '@/server/contract';

export type Keeping = {
  /** The role allows it. */
  allowed: boolean;
  busy: boolean;
  keep: (seconds: number) => void;
  sheet: ReactNode;
};

/** One press keeps at once; the sheet that follows gives words to what is kept, or undoes it. */
export function useKeeping(rigId: string): Keeping {
  const allowed = useMay('engineer');
  const toast = useToast();
  const go = useGo();
  const keep = useKeep(rigId);
  const edit = useEditCapture();
  const remove = useDeleteCapture();
  const [kept, setKept] = useState<{ capture: Capture; askedS: number } | null>(null);
  const [error, setError] = useState<string | null>(null);

  const say = (failure: unknown) => {
    const problem = asProblem(failure);
    return problem.slug === 'nothing-to-keep'
      ? 'Nothing to keep: the hub holds no samples of this rig.'
      : problem.detail || problem.title;
  };
  const start = (seconds: number) => {
    setError(null);
    keep.mutate(
      { lastSeconds: seconds, tags: [], note: '' },
      {
        onSuccess: (capture) => setKept({ capture, askedS: seconds }),
        onError: (failure) =>
          toast({
            text: `Not kept. ${say(failure)}`,
            actionLabel: 'Keep again',
            onAction: () => start(seconds),
          }),
      },
    );
  };
  const undo = (capture: Capture) =>
    remove.mutate(capture.id, {
      onSuccess: () => {
        setKept(null);
        toast({ text: 'The capture is deleted.' });
      },
      onError: (failure) => setError(`Still kept. ${say(failure)}`),
    });
  const onShelf = (capture: Capture) => {
    setKept(null);
    toast({
      text: `"${capture.title}" is on the Shelf.`,
      actionLabel: 'Open',
      onAction: () => go(capturePath(capture.id)),
    });
  };
  const save = (capture: Capture, words: KeptWords) =>
    edit.mutate(
      { captureId: capture.id, patch: words },
      {
        onSuccess: onShelf,
        onError: (failure) => setError(`Kept, but without these words. ${say(failure)}`),
      },
    );
  const sheet = kept ? (
    <WithKnownTags rigId={rigId}>
      {(knownTags) => (
        <KeepSheet
          capture={kept.capture}
          askedS={kept.askedS}
          knownTags={knownTags}
          busy={edit.isPending || remove.isPending}
          error={error}
          onSave={(words) => save(kept.capture, words)}
          onUndo={() => undo(kept.capture)}
          onClose={() => onShelf(kept.capture)}
        />
      )}
    </WithKnownTags>
  ) : null;
  return { allowed, busy: keep.isPending, keep: start, sheet };
}

/** Tags of the rig's newest captures, offered for one press. */
function WithKnownTags({ rigId, children }: { rigId: string; children: (tags: string[]) => ReactNode }) {
  const { data } = useCaptures({ rigId });
  const tags = (data?.pages ?? []).flatMap((page) => page.items.flatMap((c) => c.tags));
  return children([...new Set(tags)]);
}
