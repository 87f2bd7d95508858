import { useState } from 'react';
import { Button } from '@/client/components/button';
import { Sheet } from '@/client/components/sheet';
import { TagEditor } from '@/client/components/tag-chips';
import { Text } from '@/client/components/text';
import { TextField } from '@/client/components/text-field';
import { asProblem } from '@/client/data/api-problem';
import { useEditCapture } from '@/client/data/captures';
import type { Capture } from '@/server/contract';

/** Title, tags and note of a kept capture. */
export function EditSheet({ capture, onClose }: { capture: Capture; onClose: () => void }) {
  const edit = useEditCapture();
  const [title, setTitle] = useState(capture.title);
  const [tags, setTags] = useState<string[]>(capture.tags);
  const [note, setNote] = useState(capture.note);
  const problem = edit.error ? asProblem(edit.error) : null;
  const save = () =>
    edit.mutate(
      { captureId: capture.id, patch: { title: title.trim(), tags, note } },
      { onSuccess: onClose },
    );
  return (
    <Sheet
      title="Title, tags and note"
      open
      onClose={onClose}
      actions={
        <>
          <Button label="Cancel" onPress={onClose} />
          <Button
            kind="filled"
            label="Save"
            busy={edit.isPending}
            disabled={title.trim() === ''}
            onPress={save}
          />
        </>
      }
    >
      <TextField label="Title" value={title} onChange={setTitle} maxLength={120} />
      <TagEditor tags={tags} onChange={setTags} />
      <TextField label="Note" optional rows={4} value={note} onChange={setNote} maxLength={10_000} />
      {problem ? (
        <Text size="small" tone="fault" role="alert">
          Not saved. {problem.detail || problem.title}
        </Text>
      ) : null}
    </Sheet>
  );
}
