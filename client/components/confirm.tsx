import { Button } from '@/client/components/button';
import { Sheet } from '@/client/components/sheet';
import { Text } from '@/client/components/text';

type ConfirmProps = {
  title: string;
  /** What goes and what stays. */
  message: string;
  /** The deed, as a verb: "Delete the capture". */
  action: string;
  open: boolean;
  busy?: boolean;
  onConfirm: () => void;
  onClose: () => void;
};

/** Asked only before what cannot be undone. */
export function Confirm({ title, message, action, open, busy, onConfirm, onClose }: ConfirmProps) {
  return (
    <Sheet
      title={title}
      open={open}
      onClose={onClose}
      actions={
        <>
          <Button label="Leave it" onPress={onClose} />
          <Button label={action} kind="destructive" busy={busy} onPress={onConfirm} />
        </>
      }
    >
      <Text>{message}</Text>
    </Sheet>
  );
}
