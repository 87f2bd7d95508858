import { Button } from '@/client/components/button';
import { Screen } from '@/client/components/screen';
import { EmptyState } from '@/client/components/states';
import { useGo } from '@/client/screens/shared/use-go';

/** The reviews asked of me. Reviews are not built yet, and the page says so. */
export function InboxScreen() {
  const go = useGo();
  return (
    <Screen title="Inbox">
      <EmptyState
        title="No reviews yet"
        message="Reviews that colleagues ask of you will stand here. This version of the hub cannot ask for one yet: send the address of a capture instead, it opens for everyone who can sign in."
      >
        <Button label="Open the Shelf" onPress={() => go('/shelf')} />
      </EmptyState>
    </Screen>
  );
}
