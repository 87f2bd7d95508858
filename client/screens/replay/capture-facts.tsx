import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { Facts } from '@/client/components/facts';
import type { Fact } from '@/client/components/facts';
import { Plate } from '@/client/components/plate';
import { TagChips } from '@/client/components/tag-chips';
import { Text } from '@/client/components/text';
import { shortNumber } from '@/client/components/finding-words';
import { durationText } from '@/client/drawings/time-axis';
import { bandWords, filterWords, methodWords, wheelWords } from '@/client/screens/replay/settings-words';
import { rateText } from '@/client/screens/watch/live-data';
import { space } from '@/client/theme/tokens';
import type { Capture } from '@/server/contract';
import type { Analysis } from '@/signal/model';

/** Tags and note, as their writer left them. */
export function WordsPlate({
  capture,
  onEdit,
  onDelete,
}: {
  capture: Capture;
  onEdit: (() => void) | null;
  onDelete: (() => void) | null;
}) {
  const bare = capture.tags.length === 0 && capture.note === '';
  return (
    <Plate role="region" label="Tags and note" style={{ gap: space.m }}>
      <TagChips tags={capture.tags} />
      {capture.note ? <Text>{capture.note}</Text> : null}
      {bare ? <Text tone="scribeSoft">No tags and no note yet.</Text> : null}
      {onEdit || onDelete ? (
        <View style={{ flexDirection: 'row', flexWrap: 'wrap', gap: space.s }}>
          {onEdit ? (
            <Button
              icon="pencil"
              label={bare ? 'Add words' : 'Edit words'}
              longLabel={bare ? 'Add words: title, tags, note' : 'Edit words: title, tags, note'}
              onPress={onEdit}
            />
          ) : null}
          {onDelete ? (
            <Button
              icon="trash"
              kind="destructive"
              label="Delete"
              longLabel="Delete this capture"
              onPress={onDelete}
            />
          ) : null}
        </View>
      ) : null}
    </Plate>
  );
}

/** How it was kept, under which settings, and what came out. */
export function CaptureFacts({ capture, analysis }: { capture: Capture; analysis: Analysis | null }) {
  const { settings, rig } = capture;
  const kept: Fact[] = [
    { name: 'rig', value: rig.name },
    { name: 'first sample', value: momentText(capture.startedAt) },
    { name: 'length', value: durationText(capture.durationS) },
    { name: 'sample rate', value: rateText(capture.rateHz) },
    { name: 'channels', value: capture.channels.join(', ') },
    { name: 'wheel', value: wheelWords(rig.wheel) },
  ];
  const under: Fact[] = [
    { name: 'version', value: settings.version === 0 ? 'first settings' : String(settings.version) },
    { name: 'filter', value: filterWords(settings.filter) },
    { name: 'band', value: bandWords(settings.band) },
    { name: 'hold-off', value: settings.holdoffS === 0 ? 'none' : durationText(settings.holdoffS) },
    { name: 'speed', value: methodWords(settings.speed) },
    ...(settings.reason ? [{ name: 'reason', value: settings.reason }] : []),
  ];
  return (
    <>
      <FactsPlate title="Kept" facts={kept} />
      <FactsPlate title="Settings it was kept with" facts={under} />
      {analysis ? <FactsPlate title="Counted" facts={countedFacts(analysis)} /> : null}
    </>
  );
}

function FactsPlate({ title, facts }: { title: string; facts: readonly Fact[] }) {
  return (
    <Plate role="region" label={title} style={{ gap: space.s }}>
      <Text heading={2} weight="medium">
        {title}
      </Text>
      <Facts facts={facts} />
    </Plate>
  );
}

function countedFacts(analysis: Analysis): Fact[] {
  const bound = analysis.gaps.length > 0 ? 'at least ' : '';
  const facts: Fact[] = [
    { name: 'turns', value: `${bound}${shortNumber(Number(analysis.turns.toFixed(3)))}` },
    { name: 'pulses', value: `${bound}${shortNumber(analysis.pulses)}` },
    { name: 'positions', value: `${bound}${shortNumber(analysis.positions)}` },
  ];
  if (analysis.margin) {
    const { channel, volts } = analysis.margin;
    facts.push({
      name: `smallest margin, ${channel}`,
      value: `${shortNumber(Number(volts.toFixed(3)))} V`,
      ...(volts < 0 ? { tone: 'warn' as const } : {}),
    });
  }
  if (analysis.delayS !== 0)
    facts.push({ name: 'filter delay taken off', value: durationText(Math.abs(analysis.delayS)) });
  return facts;
}

/** The instant to the second with its zone, the reader's. */
function momentText(instant: string): string {
  return new Date(instant).toLocaleString(undefined, { dateStyle: 'medium', timeStyle: 'long' });
}
