import { View } from 'react-native';
import { FindingCard } from '@/client/components/finding-card';
import { foldFindings } from '@/client/components/finding-words';
import { Plate } from '@/client/components/plate';
import { StatusWord } from '@/client/components/status-word';
import { Text } from '@/client/components/text';
import { sinceText } from '@/client/drawings/speed-words';
import { size, space } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';
import type { Finding } from '@/signal/model';

type FindingsListProps = {
  findings: readonly Finding[];
  isLive: boolean;
  /** The settings in force cannot be run: nothing is judged. */
  unjudged: boolean;
  /** Stream time now, s. */
  streamS: number | null;
  onShow: (finding: Finding) => void;
};

export function FindingsList({ findings, isLive, unjudged, streamS, onShow }: FindingsListProps) {
  const wide = useWide();
  const folded = foldFindings(findings);
  return (
    <View role="region" aria-label="Findings" style={{ gap: space.m }}>
      <View style={[header, wide ? levelWithTabs : null]}>
        <Text heading={2} weight="medium">
          Findings
        </Text>
        <Text size="small" tone="scribeSoft" figures>
          {findings.length === 0 ? '' : `${findings.length} ${isLive ? 'now' : 'when last seen'}`}
        </Text>
      </View>
      {folded.length === 0 ? (
        <Plate style={{ paddingVertical: space.m }}>
          {isLive && !unjudged ? (
            <StatusWord status="good" word="Nothing found wrong in the signal now." />
          ) : (
            <StatusWord
              status="unknown"
              word={
                isLive
                  ? 'Not known: no speed can be made of the signal.'
                  : 'Not known: the signal is not live.'
              }
            />
          )}
        </Plate>
      ) : (
        folded.map(({ finding, follows }) => (
          <FindingCard
            key={`${finding.code}${finding.channel}${finding.from}`}
            finding={finding}
            follows={follows}
            {...(streamS === null ? {} : { when: sinceText(Math.max(0, streamS - finding.from)) })}
            onShow={() => onShow(finding)}
          />
        ))
      )}
    </View>
  );
}

const header = { flexDirection: 'row', justifyContent: 'space-between', alignItems: 'center' } as const;
/** Its first plate then stands level with the signal. */
const levelWithTabs = { minHeight: size.button, marginBottom: space.l - space.m };
