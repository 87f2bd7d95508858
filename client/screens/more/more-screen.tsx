import { Link } from 'expo-router';
import type { Href } from 'expo-router';
import { View } from 'react-native';
import { Icon } from '@/client/components/icon';
import type { IconName } from '@/client/components/icon';
import { Plate } from '@/client/components/plate';
import { Screen } from '@/client/components/screen';
import { Text } from '@/client/components/text';
import { useUser } from '@/client/data/app-data-context';
import { size, space } from '@/client/theme/tokens';

/** What has no place in the bar: me, and the hub's public contract. */
export function MoreScreen() {
  const user = useUser();
  return (
    <Screen title="More">
      <Plate flush role="group" label="Pages">
        <Row icon="person" title="Account" text={user ? `${user.name}, ${user.role}` : ''} href="/account" />
        <Row
          icon="table"
          title="API of this hub"
          text="Every call, with its shapes, for scripts and boards"
          href="/api/docs"
          plain
        />
      </Plate>
      <Plate edge="warn" style={{ gap: space.s }}>
        <Text heading={2} weight="medium">
          Rotating parts hurt people
        </Text>
        <Text size="small">
          Guard the rig and keep clear while it turns. Turnmark is a bench instrument: it is no safety
          function, no overspeed protection and no legal measurement. Local codes and qualified people decide.
        </Text>
      </Plate>
    </Screen>
  );
}

type RowProps = { icon: IconName; title: string; text: string; href: string; plain?: boolean };

/** `plain`: a page that the hub serves itself, outside of the app. */
function Row({ icon, title, text, href, plain }: RowProps) {
  return (
    <Link
      href={href as Href}
      {...(plain ? { target: '_blank' as const } : {})}
      style={
        {
          display: 'flex',
          alignItems: 'center',
          gap: space.m,
          padding: space.l,
          minHeight: size.target,
        } as object
      }
    >
      <Icon name={icon} tone="dye" />
      <View style={{ flex: 1, minWidth: 0 }}>
        <Text weight="medium">{title}</Text>
        <Text size="small" tone="scribeSoft" lines={2}>
          {text}
        </Text>
      </View>
      <Icon name="next" tone="scribeSoft" size={20} />
    </Link>
  );
}
