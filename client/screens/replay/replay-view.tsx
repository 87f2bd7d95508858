import { useState } from 'react';
import type { ReactNode } from 'react';
import { ScrollView, View } from 'react-native';
import { FindingCard } from '@/client/components/finding-card';
import { foldFindings } from '@/client/components/finding-words';
import { Plate } from '@/client/components/plate';
import { Screen, ScreenHeader, useDocumentTitle } from '@/client/components/screen';
import { StatusWord } from '@/client/components/status-word';
import { Text } from '@/client/components/text';
import { positionNouns } from '@/client/drawings/count-text';
import type { RibbonLane } from '@/client/drawings/ribbon-types';
import { durationText, secondsText } from '@/client/drawings/time-axis';
import { CaptureFacts, WordsPlate } from '@/client/screens/replay/capture-facts';
import { MeasuredPlate } from '@/client/screens/replay/measured-plate';
import { findingWindow } from '@/client/screens/replay/replay-data';
import { ReplayControls } from '@/client/screens/replay/replay-controls';
import { OverviewPicture, RibbonPicture } from '@/client/screens/replay/replay-picture';
import { WindowTable } from '@/client/screens/replay/replay-tables';
import type { Replay } from '@/client/screens/replay/use-replay';
import { shortInstant } from '@/client/screens/shared/when';
import { space } from '@/client/theme/tokens';
import { useWide } from '@/client/theme/use-theme';
import type { Capture } from '@/server/contract';
import type { Analysis, Finding } from '@/signal/model';

export type ReplayViewProps = {
  capture: Capture;
  analysis: Analysis | null;
  /** Why there is no analysis, in place of it. */
  analysisState: ReactNode;
  lanes: readonly RibbonLane[];
  replay: Replay;
  /** Under the ribbon: fetching, or what went wrong. */
  note: string | null;
  onEdit: (() => void) | null;
  onDelete: (() => void) | null;
  banner?: ReactNode;
};

const back = { href: '/shelf' as never, label: 'Back to the Shelf' };

/** A capture: its signal, its findings, its words. */
export function ReplayView(props: ReplayViewProps) {
  const wide = useWide();
  const { capture } = props;
  const [openedAtMs] = useState(() => Date.now());
  const subtitle = [
    capture.rig.name,
    durationText(capture.durationS),
    `kept ${shortInstant(capture.createdAt, openedAtMs)} by ${capture.createdBy}`,
    capture.settings.version === 0 ? 'first settings' : `settings ${capture.settings.version}`,
  ].join(' · ');
  return wide ? (
    <WideReplay {...props} subtitle={subtitle} />
  ) : (
    <PhoneReplay {...props} subtitle={subtitle} />
  );
}

function PhoneReplay(props: ReplayViewProps & { subtitle: string }) {
  const { capture, analysis, subtitle, banner, replay, lanes, note } = props;
  return (
    <Screen title={capture.title} subtitle={subtitle} back={back} banner={banner}>
      <RibbonPicture
        replay={replay}
        analysis={analysis}
        lanes={lanes}
        note={note}
        positions={positionNouns(capture.rig.sensing)[1]}
      />
      <OverviewPicture replay={replay} analysis={analysis} />
      <ReplayControls replay={replay} />
      <Side {...props} />
    </Screen>
  );
}

function WideReplay(props: ReplayViewProps & { subtitle: string }) {
  const { capture, analysis, subtitle, banner, replay, lanes, note } = props;
  useDocumentTitle(capture.title);
  return (
    <View role="main" style={{ flex: 1, minWidth: 0 }}>
      {banner}
      <View style={{ flex: 1, flexDirection: 'row', minHeight: 0 }}>
        <ScrollView
          style={{ flex: 1, minWidth: 0 }}
          contentContainerStyle={{ padding: space.l, gap: space.l, flexGrow: 1, minHeight: '100%' }}
        >
          <ScreenHeader title={capture.title} subtitle={subtitle} back={back} />
          <RibbonPicture
            replay={replay}
            analysis={analysis}
            lanes={lanes}
            note={note}
            positions={positionNouns(capture.rig.sensing)[1]}
          />
          <OverviewPicture replay={replay} analysis={analysis} />
          <ReplayControls replay={replay} />
        </ScrollView>
        <ScrollView
          style={{ width: 360, flexGrow: 0, flexShrink: 0 }}
          contentContainerStyle={{ padding: space.l, paddingLeft: 0, gap: space.l }}
        >
          <Side {...props} />
        </ScrollView>
      </View>
    </View>
  );
}

function Side({ capture, analysis, analysisState, replay, onEdit, onDelete }: ReplayViewProps) {
  const show = (finding: Finding) => {
    if (finding.channel) replay.setFocus(finding.channel);
    if (analysis) replay.show(findingWindow(analysis, finding, replay.window, replay.durationS), finding.at);
  };
  return (
    <>
      <View role="region" aria-label="Findings" style={{ gap: space.m }}>
        <View style={headerRow}>
          <Text heading={2} weight="medium">
            Findings
          </Text>
          {analysis ? <WindowTable replay={replay} analysis={analysis} /> : null}
        </View>
        {analysis ? <FoundPlates analysis={analysis} onShow={show} /> : analysisState}
      </View>
      <WordsPlate capture={capture} onEdit={onEdit} onDelete={onDelete} />
      {analysis ? <MeasuredPlate analysis={analysis} sensing={capture.rig.sensing} /> : null}
      <CaptureFacts capture={capture} analysis={analysis} />
    </>
  );
}

// The picture of a button at the right stands level with the plates below.
const headerRow = {
  flexDirection: 'row',
  justifyContent: 'space-between',
  alignItems: 'center',
  marginRight: -space.m,
} as const;

function FoundPlates({ analysis, onShow }: { analysis: Analysis; onShow: (finding: Finding) => void }) {
  const folded = foldFindings(analysis.findings);
  if (folded.length === 0) {
    return (
      <Plate style={{ paddingVertical: space.m }}>
        <StatusWord status="good" word="Nothing found wrong under these settings." />
      </Plate>
    );
  }
  return folded.map(({ finding, follows }, i) => (
    <FindingCard
      key={`${finding.code}${i}`}
      finding={finding}
      follows={follows}
      when={`at ${secondsText(finding.at, 0.01, 1)}`}
      onShow={() => onShow(finding)}
    />
  ));
}
