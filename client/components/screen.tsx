import type { ReactNode } from 'react';
import { useEffect } from 'react';
import { useRouter } from 'expo-router';
import type { Href } from 'expo-router';
import { ScrollView, View } from 'react-native';
import { IconButton } from '@/client/components/icon-button';
import { Text } from '@/client/components/text';
import { space } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';

type ScreenProps = {
  title: string;
  subtitle?: string;
  /** Where the back arrow leads; without it there is none. */
  back?: { href: Href; label: string };
  /** Buttons at the right of the title. */
  actions?: ReactNode;
  /** Tabs or filters under the title. */
  below?: ReactNode;
  /** Stands still at the bottom, over the navigation. */
  footer?: ReactNode;
  /** Above everything: offline and the like. */
  banner?: ReactNode;
  children: ReactNode;
  /** Widest the body grows on a wide screen; `full` for tables and drawings. */
  width?: number | 'full';
};

/** The frame of every page inside the shell: header, scrolling body, footer. */
export function Screen({
  title,
  subtitle,
  back,
  actions,
  below,
  footer,
  banner,
  children,
  width = 720,
}: ScreenProps) {
  const wide = useWide();
  const limit = wide && width !== 'full' ? { maxWidth: width } : null;
  useDocumentTitle(title);
  return (
    <View role="main" style={{ flex: 1, minWidth: 0 }}>
      {banner}
      <ScrollView
        style={{ flex: 1 }}
        contentContainerStyle={[
          {
            padding: space.l,
            paddingTop: wide ? space.m : space.xs,
            gap: wide ? space.l : space.m,
            flexGrow: 1,
            width: '100%',
          },
          limit,
        ]}
      >
        <ScreenHeader title={title} subtitle={subtitle} back={back} actions={actions} />
        {below}
        {children}
      </ScrollView>
      {footer}
    </View>
  );
}

type HeaderProps = Pick<ScreenProps, 'title' | 'subtitle' | 'back' | 'actions'>;

export function ScreenHeader({ title, subtitle, back, actions }: HeaderProps) {
  const wide = useWide();
  const router = useRouter();
  return (
    <View
      style={{
        flexDirection: 'row',
        alignItems: 'flex-start',
        gap: space.xs,
        marginLeft: back ? -space.s : 0,
      }}
    >
      {back ? <IconButton icon="back" label={back.label} onPress={() => router.navigate(back.href)} /> : null}
      <View style={{ flex: 1, minWidth: 0, paddingTop: wide ? 4 : 8 }}>
        <Text
          heading={1}
          size={title.length > 44 ? (wide ? 'lead' : 'body') : wide ? 'title' : 'lead'}
          weight="medium"
          lines={3}
        >
          {title}
        </Text>
        {subtitle ? (
          <Text size={wide ? 'small' : 'tiny'} tone="scribeSoft" figures>
            {subtitle}
          </Text>
        ) : null}
      </View>
      {actions ? (
        <View style={{ flexDirection: 'row', flexWrap: 'wrap', gap: space.xs, justifyContent: 'flex-end' }}>
          {actions}
        </View>
      ) : null}
    </View>
  );
}

/** The tab of the browser says where one is. */
export function useDocumentTitle(title: string): void {
  useEffect(() => {
    document.title = title ? `${title} · Turnmark` : 'Turnmark';
  }, [title]);
}
