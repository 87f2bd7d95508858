import { useEffect, useRef } from 'react';
import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { Text } from '@/client/components/text';
import { space } from '@/client/theme/tokens';

type ShowMoreProps = { more: boolean; busy: boolean; failed: boolean; onMore: () => void };

/** The next page, when the end comes into sight or on a press. After a failure only on a press. */
export function ShowMore({ more, busy, failed, onMore }: ShowMoreProps) {
  const place = useRef<View>(null);
  const ask = useRef(onMore);
  useEffect(() => {
    ask.current = onMore;
  });
  const watching = more && !busy && !failed;
  useEffect(() => {
    if (!watching || !place.current) return undefined;
    const observer = new IntersectionObserver(([entry]) => entry?.isIntersecting && ask.current());
    observer.observe(place.current as unknown as Element);
    return () => observer.disconnect();
  }, [watching]);
  if (!more) return null;
  return (
    <View ref={place} style={{ alignItems: 'center', gap: space.s, padding: space.m }}>
      {failed ? (
        <Text role="alert" size="small" tone="fault">
          The next captures could not be fetched.
        </Text>
      ) : null}
      <Button label={failed ? 'Try again' : 'Show more'} busy={busy} onPress={onMore} />
    </View>
  );
}
