import { useLocalSearchParams } from 'expo-router';
import { lazyPage } from '@/client/screens/shell/lazy-page';

const RigSetupScreen = lazyPage(
  async () => (await import('@/client/screens/rig-setup/pages')).RigSetupScreen,
);

export default function RigSetupRoute() {
  const { rigId } = useLocalSearchParams<{ rigId: string }>();
  return <RigSetupScreen key={rigId} rigId={rigId} />;
}
