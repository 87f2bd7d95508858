import { View } from 'react-native';
import { Plate } from '@/client/components/plate';
import { FaultShape, GoodShape, UnknownShape } from '@/client/components/shapes';
import { Text } from '@/client/components/text';
import { Button } from '@/client/components/button';
import type { Check, CheckState } from '@/client/screens/connect/checklist';
import { rigPath, useGo } from '@/client/screens/shared/use-go';
import { space } from '@/client/theme/tokens';

const shapes = { waiting: UnknownShape, done: GoodShape, wrong: FaultShape };
const words: Record<CheckState, string> = { waiting: 'not yet', done: 'done', wrong: 'look here' };
const tones = { waiting: 'still', done: 'good', wrong: 'fault' } as const;

/** Ticks off by itself what has been reached; says what to do about the rest. */
export function ChecklistPlate({ rigId, checks }: { rigId: string; checks: readonly Check[] }) {
  const go = useGo();
  const all = checks.every((c) => c.state === 'done');
  const firstOpen = checks.findIndex((c) => c.state !== 'done');
  return (
    <Plate style={{ gap: space.l }}>
      <Text heading={2} size="lead" weight="medium">
        3. What has arrived
      </Text>
      <View role="list" aria-label="Checklist" style={{ gap: space.m }}>
        {checks.map((check, i) => (
          <CheckRow key={check.id} check={check} open={i === firstOpen || check.state === 'wrong'} />
        ))}
      </View>
      {/* Said without stealing the focus, and only when it changes. */}
      <Text role="status" size="small" tone="scribeSoft">
        {all
          ? 'All done: the rig speaks.'
          : `${checks.filter((c) => c.state === 'done').length} of ${checks.length} done.`}
      </Text>
      <Button
        label="Watch the rig"
        kind={all ? 'filled' : 'outlined'}
        onPress={() => go(rigPath.watch(rigId))}
      />
    </Plate>
  );
}

function CheckRow({ check, open }: { check: Check; open: boolean }) {
  const Shape = shapes[check.state];
  return (
    <View role="listitem" style={{ flexDirection: 'row', gap: space.m }}>
      <View style={{ paddingTop: 3 }}>
        <Shape />
      </View>
      <View style={{ flex: 1, minWidth: 0 }}>
        <View style={{ flexDirection: 'row', justifyContent: 'space-between', gap: space.m }}>
          <Text weight="medium">{check.title}</Text>
          <Text size="small" tone={tones[check.state]}>
            {words[check.state]}
          </Text>
        </View>
        {check.says ? (
          <Text size="small" tone="scribeSoft" figures>
            {check.says}
          </Text>
        ) : null}
        {open && check.todo ? <Text size="small">{check.todo}</Text> : null}
      </View>
    </View>
  );
}
