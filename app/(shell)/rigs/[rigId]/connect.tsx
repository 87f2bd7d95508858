import { useLocalSearchParams } from 'expo-router';
import { ConnectScreen } from '@/client/screens/connect/connect-screen';

export default function ConnectRoute() {
  const { rigId } = useLocalSearchParams<{ rigId: string }>();
  return <ConnectScreen key={rigId} rigId={rigId} />;
}
