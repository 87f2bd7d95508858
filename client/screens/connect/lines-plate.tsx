import { useState } from 'react';
import type { ReactNode } from 'react';
import { View } from 'react-native';
import type { TextStyle } from 'react-native';
import type { Rig } from '@/server/contract';
import { Plate } from '@/client/components/plate';
import { Segmented } from '@/client/components/segmented';
import { WarnShape } from '@/client/components/shapes';
import { Text } from '@/client/components/text';
import { TextField } from '@/client/components/text-field';
import { useHubInfo } from '@/client/data/hub-info';
import { CopyButton } from '@/client/screens/connect/copy-button';
import { firstAddress, hubAddress, isLocalOnly } from '@/client/screens/connect/hub-address';
import { rateWords } from '@/client/screens/connect/checklist';
import { curlSnippet, nodeSnippet } from '@/client/screens/connect/snippets';
import { testSignal } from '@/client/screens/connect/test-signal';
import { rpmText } from '@/client/drawings/speed-words';
import { space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

const noKey = 'PUT-THE-KEY-HERE';
const nodeSeconds = 30;
const curlSeconds = 1;
const tools = [
  { value: 'node', label: 'Node' },
  { value: 'curl', label: 'curl' },
] as const;

/** Lines to paste into a shell, for this rig, this hub and this key. */
export function LinesPlate({ rig, rigKey }: { rig: Rig; rigKey: string | null }) {
  const [tool, setTool] = useState<'node' | 'curl'>('node');
  const info = useHubInfo();
  const [edited, setTyped] = useState<string | null>(null);
  const typed = edited ?? firstAddress(window.location.origin, info.data?.addresses ?? []);
  const hub = hubAddress(typed);
  const signal = testSignal(rig);
  const shared = { hub: hub ?? '', key: rigKey ?? noKey, signal };
  const text =
    tool === 'node'
      ? nodeSnippet({ ...shared, seconds: nodeSeconds })
      : curlSnippet({ ...shared, seconds: curlSeconds });
  return (
    <Plate style={{ gap: space.l }}>
      <Text heading={2} size="lead" weight="medium">
        2. Send a test signal
      </Text>
      <Text size="small" tone="scribeSoft">
        {tool === 'node'
          ? `Streams ${nodeSeconds} s of this wheel at ${rpmText(signal.shaftRpm)} rpm, ${rateWords(signal.rateHz)} a channel. Needs Node 18 or newer.`
          : `Posts ${curlSeconds} s of this wheel at ${rpmText(signal.shaftRpm)} rpm as CSV, ${rateWords(signal.rateHz)} a channel. Needs curl and awk.`}{' '}
        Paste it into a shell (on Windows: WSL or Git Bash). No board is needed.
      </Text>
      <TextField
        label="Address of the hub, as the board reaches it"
        value={typed}
        onChange={setTyped}
        code
        error={hub === null ? 'That is no address. It looks like http://192.168.0.12:4680.' : null}
      />
      {hub !== null && isLocalOnly(hub) ? (
        <Note>
          This address works on this machine only. A board elsewhere needs the address of the machine in the
          network: put it above.
        </Note>
      ) : null}
      {rigKey === null ? (
        <Note>Make a key first: the lines then hold it. Else put one that you have in place of {noKey}.</Note>
      ) : null}
      <Segmented label="Tool" bare value={tool} options={tools} onChange={setTool} />
      {hub !== null ? (
        <>
          <Lines text={text} />
          <View style={{ alignSelf: 'flex-start' }}>
            <CopyButton label={`Copy the ${tool === 'node' ? 'Node' : 'curl'} lines`} text={text} />
          </View>
        </>
      ) : null}
      <VoltageLimits rig={rig} />
    </Plate>
  );
}

function Lines({ text }: { text: string }) {
  const colours = useColours();
  return (
    <View
      role="region"
      aria-label="Lines to paste"
      tabIndex={0}
      style={{
        maxHeight: 320,
        overflow: 'scroll',
        padding: space.m,
        backgroundColor: colours.ground,
        borderWidth: 1,
        borderColor: colours.hairline,
      }}
    >
      <Text code size="tiny" style={asTyped}>
        {text}
      </Text>
    </View>
  );
}

// Lines must not be broken anew: what is marked by hand must work as well.
const asTyped = { wordBreak: 'normal', overflowWrap: 'normal', whiteSpace: 'pre' } as unknown as TextStyle;

function Note({ children }: { children: ReactNode }) {
  return (
    <View role="note" style={{ flexDirection: 'row', gap: space.s }}>
      <View style={{ paddingTop: 1 }}>
        <WarnShape />
      </View>
      <Text size="small" style={{ flex: 1 }}>
        {children}
      </Text>
    </View>
  );
}

function VoltageLimits({ rig }: { rig: Rig }) {
  const limits = rig.channels.map(
    (c) => `${c.name}: ${c.maxInputV === null ? 'not given' : `${c.maxInputV} V`}`,
  );
  const unknown = rig.channels.some((c) => c.maxInputV === null);
  return (
    <View role="note" style={{ flexDirection: 'row', gap: space.s }}>
      <View style={{ paddingTop: 1 }}>
        <WarnShape />
      </View>
      <View style={{ flex: 1, gap: space.xs }}>
        <Text size="small" weight="medium">
          Before a real sensor is wired: highest input {limits.join(', ')}
        </Text>
        <Text size="small" tone="scribeSoft">
          {unknown ? 'Look the missing limits up in the data of the board and put them into Setup. ' : ''}
          More volts destroy the board. Measure first, wire with the rig unpowered and guarded, and keep clear
          of what turns. Local codes and qualified people decide.
        </Text>
      </View>
    </View>
  );
}
