import { ScrollView } from 'react-native';
import { Text } from '@/client/components/text';

export function Gallery() {
  return (
    <ScrollView>
      <Text size="title" heading={1}>
        Gallery
      </Text>
    </ScrollView>
  );
}
