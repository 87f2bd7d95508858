import { useLocalSearchParams } from 'expo-router';
import { RigSetupScreen } from '@/client/screens/rig-setup/rig-setup-screen';

export default function RigSetupRoute() {
  const { rigId } = useLocalSearchParams<{ rigId: string }>();
  return <RigSetupScreen key={rigId} rigId={rigId} />;
}
