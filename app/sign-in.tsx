import { useLocalSearchParams } from 'expo-router';
import { SignInScreen } from '@/client/screens/sign-in/sign-in-screen';

export default function SignInRoute() {
  const { to } = useLocalSearchParams();
  return <SignInScreen to={to} />;
}
