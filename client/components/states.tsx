import type { ReactNode } from 'react';
import { ActivityIndicator, View } from 'react-native';
import { Button } from '@/client/components/button';
import { Mark } from '@/client/components/mark';
import { Plate } from '@/client/components/plate';
import { FaultShape, WarnShape } from '@/client/components/shapes';
import { Text } from '@/client/components/text';
import { space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

/** Nothing here yet: what would stand here and how to get it. */
export function EmptyState({
  title,
  message,
  level = 2,
  children,
}: {
  title: string;
  message: string;
  /** 1 where it is the whole page, without a header of its own. */
  level?: 1 | 2;
  children?: ReactNode;
}) {
  return (
    <View
      style={{ alignItems: 'center', gap: space.m, padding: space.xxl, maxWidth: 480, alignSelf: 'center' }}
    >
      <Mark size={56} tone="scribeSoft" />
      <Text heading={level} size="lead" weight="medium" style={{ textAlign: 'center' }}>
        {title}
      </Text>
      <Text tone="scribeSoft" style={{ textAlign: 'center' }}>
        {message}
      </Text>
      {children ? (
        <View style={{ gap: space.s, marginTop: space.s, alignSelf: 'stretch' }}>{children}</View>
      ) : null}
    </View>
  );
}

type ErrorStateProps = {
  title: string;
  /** What is kept and what to do next. */
  message: string;
  onRetry?: () => void;
  children?: ReactNode;
};

export function ErrorState({ title, message, onRetry, children }: ErrorStateProps) {
  return (
    <View role="alert" style={{ margin: space.l, maxWidth: 560, alignSelf: 'center', width: '100%' }}>
      <Plate edge="fault" style={{ gap: space.m }}>
        <View style={{ flexDirection: 'row', gap: space.s, alignItems: 'center' }}>
          <FaultShape />
          <Text heading={2} weight="medium" style={{ flex: 1 }}>
            {title}
          </Text>
        </View>
        <Text tone="scribeSoft">{message}</Text>
        {onRetry ? <Button label="Try again" onPress={onRetry} style={{ alignSelf: 'flex-start' }} /> : null}
        {children}
      </Plate>
    </View>
  );
}

export function NoPermission({ message }: { message: string }) {
  return <EmptyState title="Not open to your role" message={message} />;
}

/** Stands above the page while the hub cannot be reached; what is shown may be old. */
export function OfflineBanner({ message, onRetry }: { message: string; onRetry?: () => void }) {
  const colours = useColours();
  return (
    <View
      role="status"
      style={{
        flexDirection: 'row',
        alignItems: 'center',
        gap: space.s,
        paddingHorizontal: space.l,
        minHeight: 44,
        borderBottomWidth: 1,
        borderBottomColor: colours.hairline,
        backgroundColor: colours.plateRaised,
      }}
    >
      <WarnShape />
      <Text size="small" style={{ flex: 1, paddingVertical: space.s }}>
        {message}
      </Text>
      {onRetry ? <Button kind="quiet" label="Try now" onPress={onRetry} /> : null}
    </View>
  );
}

/** While the first answer is on its way. */
export function Loading({ label = 'Loading' }: { label?: string }) {
  const colours = useColours();
  return (
    <View
      role="status"
      style={{ alignItems: 'center', justifyContent: 'center', gap: space.m, padding: space.huge }}
    >
      <ActivityIndicator color={colours.dye} aria-label={label} />
      <Text size="small" tone="scribeSoft">
        {label}
      </Text>
    </View>
  );
}

/** Empty plates of the size of what will come, so that the page does not jump. */
export function Skeleton({
  rows = 3,
  height = 96,
  label = 'Loading',
}: {
  rows?: number;
  height?: number;
  label?: string;
}) {
  const colours = useColours();
  return (
    <View role="status" aria-label={label} style={{ gap: space.m }}>
      {Array.from({ length: rows }, (_, i) => (
        <Plate key={i} style={{ height, gap: space.m, opacity: 1 - i * 0.22 }}>
          <View style={{ width: '38%', height: 14, backgroundColor: colours.hairline }} />
          <View style={{ width: '62%', height: 10, backgroundColor: colours.hairline, opacity: 0.6 }} />
        </Plate>
      ))}
    </View>
  );
}
