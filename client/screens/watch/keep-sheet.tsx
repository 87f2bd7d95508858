import { useState } from 'react';
import { Button } from '@/client/components/button';
import { Sheet } from '@/client/components/sheet';
import { TagEditor } from '@/client/components/tag-chips';
import { Text } from '@/client/components/text';
import { TextField } from '@/client/components/text-field';
import { durationText } from '@/client/drawings/time-axis';
import type { Capture } from '@/server/contract';

export type KeptWords = { title: string; tags: string[]; note: string };

type KeepSheetProps = {
  capture: Capture;
  /** What was asked for, s: said where less was there. */
  askedS: number;
  knownTags: readonly string[];
  busy: boolean;
  error: string | null;
  onSave: (words: KeptWords) => void;
  onUndo: () => void;
  onClose: () => void;
};

/** The capture is kept already; this only gives it words. Closing leaves it kept. */
export function KeepSheet({
  capture,
  askedS,
  knownTags,
  busy,
  error,
  onSave,
  onUndo,
  onClose,
}: KeepSheetProps) {
  const [title, setTitle] = useState(capture.title);
  const [tags, setTags] = useState<string[]>(capture.tags);
  const [note, setNote] = useState(capture.note);
  const less = askedS < 3600 && capture.durationS < askedS - 0.5;
  return (
    <Sheet
      title={`Kept: ${durationText(capture.durationS)}`}
      open
      onClose={onClose}
      actions={
        <>
          <Button
            label="Undo"
            longLabel="Undo: delete this capture"
            kind="destructive"
            disabled={busy}
            onPress={onUndo}
          />
          <Button
            label="Save"
            kind="filled"
            busy={busy}
            disabled={title.trim() === ''}
            onPress={() => onSave({ title: title.trim(), tags, note })}
          />
        </>
      }
    >
      <Text size="small" tone="scribeSoft">
        {less
          ? `The hub held ${durationText(capture.durationS)} of this stream, not ${durationText(askedS)}. `
          : ''}
        It is on the Shelf already. A title, tags and a note help others to find it.
      </Text>
      <TextField label="Title" value={title} onChange={setTitle} maxLength={120} />
      <TagEditor tags={tags} onChange={setTags} known={knownTags} />
      <TextField
        label="Note"
        optional
        rows={3}
        value={note}
        onChange={setNote}
        maxLength={10_000}
        help="What was done, what was seen, and the conditions: gap, wheel, supply, load."
      />
      {error ? (
        <Text size="small" tone="fault" role="alert">
          {error}
        </Text>
      ) : null}
    </Sheet>
  );
}
