import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { useDocumentTitle } from '@/client/components/screen';
import { EmptyState } from '@/client/components/states';
import { useGo } from '@/client/screens/shared/use-go';
import { useColours } from '@/client/theme/use-theme';

/** An address that leads nowhere, with a way home. */
export function NotFoundScreen() {
  const go = useGo();
  const colours = useColours();
  useDocumentTitle('Not found');
  return (
    <View role="main" style={{ flex: 1, justifyContent: 'center', backgroundColor: colours.ground }}>
      <EmptyState
        level={1}
        title="There is no such page"
        message="The address may be mistyped, or from another version of the hub."
      >
        <Button label="Go to the rigs" kind="filled" onPress={() => go('/rigs')} />
      </EmptyState>
    </View>
  );
}
