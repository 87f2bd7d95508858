import { Link } from 'expo-router';
import type { Href } from 'expo-router';
import { ScrollView } from 'react-native';
import { Text } from '@/client/components/text';
import { size, space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

export type Tab = { label: string; href: Href; current?: boolean };

/** The pages of one thing, as links: each has its own address. */
export function Tabs({ label, tabs }: { label: string; tabs: readonly Tab[] }) {
  const colours = useColours();
  return (
    <ScrollView
      horizontal
      showsHorizontalScrollIndicator={false}
      style={{ flexGrow: 0 }}
      contentContainerStyle={{ gap: space.s }}
      {...({ role: 'navigation', 'aria-label': label } as object)}
    >
      {tabs.map((tab) => (
        <Link
          key={tab.label}
          href={tab.href}
          replace
          {...(tab.current ? ({ 'aria-current': 'page' } as object) : {})}
          style={
            {
              display: 'flex',
              alignItems: 'center',
              minHeight: size.target,
              paddingHorizontal: space.m,
              borderBottomWidth: 3,
              borderBottomColor: tab.current ? colours.dye : 'transparent',
              outlineOffset: -2,
            } as object
          }
        >
          <Text weight="medium" tone={tab.current ? 'scribe' : 'scribeSoft'}>
            {tab.label}
          </Text>
        </Link>
      ))}
    </ScrollView>
  );
}
