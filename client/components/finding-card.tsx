import { View } from 'react-native';
import { Button } from '@/client/components/button';
import { Plate } from '@/client/components/plate';
import { SeverityShape } from '@/client/components/shapes';
import { Text } from '@/client/components/text';
import { evidenceText, foldAlike, severityTone, severityWord } from '@/client/components/finding-words';
import { unbroken } from '@/client/components/unbroken';
import { space } from '@/client/theme/tokens';
import type { Finding } from '@/signal/model';

type FindingCardProps = {
  finding: Finding;
  /** When: "12 s ago", "at 6.41 s". */
  when?: string;
  onShow?: () => void;
  /** Findings that follow from this one, folded under it. */
  follows?: readonly Finding[];
};

/** One sentence of what is wrong, the evidence, what usually mends it, and the place in the signal. */
export function FindingCard({ finding, when, onShow, follows = [] }: FindingCardProps) {
  const { severity, message, remedy, outcome, channel } = finding;
  const evidence = evidenceText(finding.evidence);
  return (
    <Plate
      edge={severityTone[severity]}
      role="article"
      label={`${severityWord[severity]}: ${message}`}
      style={{ gap: space.xs, paddingVertical: space.m }}
    >
      <View style={{ flexDirection: 'row', gap: space.s }}>
        <View style={{ paddingTop: 3 }}>
          <SeverityShape severity={severity} />
        </View>
        <Text weight="medium" style={{ flex: 1 }}>
          {unbroken(message)}
        </Text>
        {when ? (
          <Text size="small" tone="scribeSoft" figures>
            {when}
          </Text>
        ) : null}
      </View>
      <Text size="small" tone={severityTone[severity]}>
        {outcome === 'cannot-tell' ? 'Cannot tell' : severityWord[severity]}
        <Text size="small" tone="scribeSoft" figures>
          {channel ? `, channel ${channel}` : ''}
          {evidence ? ` · ${unbroken(evidence)}` : ''}
        </Text>
      </Text>
      <Text size="small">{unbroken(outcome === 'cannot-tell' ? `Do this: ${remedy}` : remedy)}</Text>
      {foldAlike(follows).map(({ finding: f, times }) => (
        <Text key={`${f.code}${f.channel}${f.from}`} size="small" tone="scribeSoft">
          Follows from it{times > 1 ? `, ${times} times` : ''}: {unbroken(f.message)}
        </Text>
      ))}
      {onShow ? (
        <Button
          kind="quiet"
          label="Show me"
          longLabel={`Show me: ${message}`}
          onPress={onShow}
          style={{ alignSelf: 'flex-start', paddingHorizontal: 0, marginBottom: -space.s }}
        />
      ) : null}
    </Plate>
  );
}
