import { ScrollView, View, useWindowDimensions } from 'react-native';
import { KeepBar } from '@/client/components/keep-bar';
import { Screen, ScreenHeader, useDocumentTitle } from '@/client/components/screen';
import { SchemeSwitch } from '@/client/components/scheme-switch';
import { Text } from '@/client/components/text';
import { lookbackWords } from '@/client/components/keep-words';
import { CautionLine } from '@/client/screens/watch/caution';
import { FindingsList } from '@/client/screens/watch/findings-list';
import { RibbonChoices, RibbonControls } from '@/client/screens/watch/ribbon-controls';
import { RibbonPlate } from '@/client/screens/watch/ribbon-plate';
import { SpeedPlate } from '@/client/screens/watch/speed-plate';
import { useWatchParts } from '@/client/screens/watch/watch-parts';
import type { WatchViewProps } from '@/client/screens/watch/watch-parts';
import { NumbersPlate, WheelPlate } from '@/client/screens/watch/wheel-plate';
import { space } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';

/** Watch without its data: what it draws is what it is given. */
export function WatchView(props: WatchViewProps) {
  return useWide() ? <WideWatch {...props} /> : <PhoneWatch {...props} />;
}

function PhoneWatch(props: WatchViewProps) {
  const parts = useWatchParts(props);
  const { rig, banner, tabs } = props;
  return (
    <Screen
      title={rig.name}
      subtitle={parts.subtitle}
      back={{ href: '/rigs' as never, label: 'Back to rigs' }}
      actions={<SchemeSwitch />}
      below={tabs}
      banner={banner}
      footer={parts.keepBar ? <KeepBar {...parts.keepBar} /> : null}
    >
      <SpeedPlate {...parts.speed} />
      {parts.problem}
      <View style={{ gap: space.s }}>
        <RibbonPlate {...parts.ribbon} />
        <RibbonControls {...parts.controls} />
        <RibbonChoices {...parts.controls} />
      </View>
      <FindingsList {...parts.findings} />
      {parts.wheel ? <WheelPlate {...parts.wheel} size={280} /> : null}
      {parts.live ? <NumbersPlate live={parts.live} sensing={rig.sensing} isLive={parts.isLive} /> : null}
      <CautionLine />
    </Screen>
  );
}

/** Below this the findings stand in the left column, so that the signal keeps its room. */
const threeColumnsFrom = 1240;

function WideWatch(props: WatchViewProps) {
  const parts = useWatchParts(props);
  const { rig, banner, tabs } = props;
  useDocumentTitle(rig.name);
  const roomy = useWindowDimensions().width >= threeColumnsFrom;
  const column = { gap: space.l, padding: space.l } as const;
  return (
    <View role="main" style={{ flex: 1, minWidth: 0 }}>
      {banner}
      <View style={{ flex: 1, flexDirection: 'row', minHeight: 0 }}>
        <ScrollView
          style={{ width: 312, flexGrow: 0, flexShrink: 0 }}
          contentContainerStyle={[column, { paddingRight: 0 }]}
        >
          <ScreenHeader title={rig.name} subtitle={parts.subtitle} />
          <SpeedPlate {...parts.speed} />
          {roomy ? null : <FindingsList {...parts.findings} />}
          {parts.wheel ? <WheelPlate {...parts.wheel} size={236} /> : null}
          {parts.live ? <NumbersPlate live={parts.live} sensing={rig.sensing} isLive={parts.isLive} /> : null}
          {roomy ? null : <CautionLine />}
        </ScrollView>
        <ScrollView
          style={{ flex: 1, minWidth: 0 }}
          contentContainerStyle={[column, { flexGrow: 1, minHeight: '100%' }]}
        >
          <View
            style={{ flexDirection: 'row', flexWrap: 'wrap', justifyContent: 'space-between', gap: space.s }}
          >
            {tabs ?? <View />}
            <View style={{ flexDirection: 'row', gap: space.s, alignItems: 'center' }}>
              <RibbonChoices {...parts.controls} />
              <SchemeSwitch />
            </View>
          </View>
          {parts.problem}
          <RibbonPlate {...parts.ribbon} />
          <View
            style={{
              flexDirection: 'row',
              flexWrap: 'wrap',
              justifyContent: 'space-between',
              alignItems: 'center',
              gap: space.m,
            }}
          >
            <RibbonControls {...parts.controls} />
            {parts.keepBar ? (
              <View style={{ flexDirection: 'row', alignItems: 'center', gap: space.m, marginLeft: 'auto' }}>
                <View style={{ alignItems: 'flex-end' }}>
                  <Text size="small" tone="scribeSoft">
                    Lookback
                  </Text>
                  <Text size="small" weight="medium" figures>
                    {lookbackWords(parts.keepBar.lookbackS)}
                  </Text>
                </View>
                <KeepBar {...parts.keepBar} />
              </View>
            ) : null}
          </View>
        </ScrollView>
        {roomy ? (
          <ScrollView
            style={{ width: 300, flexGrow: 0, flexShrink: 0 }}
            contentContainerStyle={[column, { paddingLeft: 0, flexGrow: 1, justifyContent: 'space-between' }]}
          >
            <FindingsList {...parts.findings} />
            <CautionLine />
          </ScrollView>
        ) : null}
      </View>
    </View>
  );
}
