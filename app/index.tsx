import { Redirect } from 'expo-router';
import type { Href } from 'expo-router';

export default function IndexRoute() {
  return <Redirect href={'/rigs' as Href} />;
}
