import { Link, usePathname } from 'expo-router';
import type { Href } from 'expo-router';
import type { ReactNode } from 'react';
import { View } from 'react-native';
import { useSafeAreaInsets } from 'react-native-safe-area-context';
import { Icon } from '@/client/components/icon';
import type { IconName } from '@/client/components/icon';
import { Mark } from '@/client/components/mark';
import { Text } from '@/client/components/text';
import { space } from '@/client/theme/tokens';
import { useColours, useWide } from '@/client/theme/use-theme';

type Place = { label: string; icon: IconName; href: Href; covers: readonly string[] };

const places: readonly Place[] = [
  { label: 'Rigs', icon: 'rigs', href: '/rigs' as Href, covers: ['/rigs'] },
  { label: 'Shelf', icon: 'shelf', href: '/shelf' as Href, covers: ['/shelf'] },
  { label: 'Inbox', icon: 'inbox', href: '/inbox' as Href, covers: ['/inbox'] },
  {
    label: 'More',
    icon: 'more',
    href: '/more' as Href,
    covers: ['/more', '/account', '/team', '/hub', '/gap', '/proofs'],
  },
];

/** Navigation around every page for signed-in people: a bar at the thumb, or a rail at the left. */
export function AppShell({ children }: { children: ReactNode }) {
  const colours = useColours();
  const wide = useWide();
  const insets = useSafeAreaInsets();
  const path = usePathname();
  const items = places.map((place) => (
    <NavItem
      key={place.label}
      place={place}
      wide={wide}
      current={place.covers.some((p) => path === p || path.startsWith(`${p}/`))}
    />
  ));
  const line = { borderColor: colours.hairline, backgroundColor: colours.plate };
  if (wide) {
    return (
      <View style={{ flex: 1, flexDirection: 'row', backgroundColor: colours.ground }}>
        <View
          role="navigation"
          aria-label="Main"
          style={[{ width: 88, borderRightWidth: 1, paddingTop: space.l, gap: space.xs }, line]}
        >
          <View style={{ alignItems: 'center', paddingBottom: space.xl }}>
            <Mark size={40} label="Turnmark" />
          </View>
          {items}
        </View>
        <View style={{ flex: 1, minWidth: 0 }}>{children}</View>
      </View>
    );
  }
  return (
    <View style={{ flex: 1, backgroundColor: colours.ground, paddingTop: insets.top }}>
      <View style={{ flex: 1, minHeight: 0 }}>{children}</View>
      <View
        role="navigation"
        aria-label="Main"
        style={[{ flexDirection: 'row', borderTopWidth: 1, paddingBottom: insets.bottom }, line]}
      >
        {items}
      </View>
    </View>
  );
}

function NavItem({ place, current, wide }: { place: Place; current: boolean; wide: boolean }) {
  const colours = useColours();
  const tone = current ? 'dye' : 'scribeSoft';
  const edge = wide
    ? { borderLeftWidth: 3, borderLeftColor: current ? colours.dye : 'transparent' }
    : { borderTopWidth: 3, borderTopColor: current ? colours.dye : 'transparent' };
  return (
    <Link
      href={place.href}
      {...(current ? ({ 'aria-current': 'page' } as object) : {})}
      style={
        {
          display: 'flex',
          flexDirection: 'column',
          alignItems: 'center',
          justifyContent: 'center',
          gap: 2,
          flex: wide ? undefined : 1,
          minHeight: wide ? 72 : 60,
          outlineOffset: -4,
          ...edge,
        } as object
      }
    >
      <Icon name={place.icon} tone={tone} />
      <Text size="tiny" weight="medium" tone={tone}>
        {place.label}
      </Text>
    </Link>
  );
}
