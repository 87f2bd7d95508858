import { View } from 'react-native';
import { Facts } from '@/client/components/facts';
import { Plate } from '@/client/components/plate';
import { Table } from '@/client/components/table';
import { Text } from '@/client/components/text';
import { shortNumber } from '@/client/components/finding-words';
import { positionNouns } from '@/client/drawings/count-text';
import { TableButton } from '@/client/drawings/figure';
import { WheelFace } from '@/client/drawings/wheel-face';
import { wheelDrawing } from '@/client/drawings/wheel-geometry';
import { channelFacts, motionFacts, turnSpeedText } from '@/client/screens/replay/measured-facts';
import { space } from '@/client/theme/tokens';
import type { CaptureStatistics, OrderLine } from '@/signal/capture-statistics/shapes';
import type { Analysis, WheelFace as Face } from '@/signal/model';

const faceSize = 220;
const mostRows = 300;

/** What the capture says of its teeth, its wheel and its levels. */
export function MeasuredPlate({ analysis, sensing }: { analysis: Analysis; sensing: string }) {
  const { statistics, wheelFace } = analysis;
  if (!statistics) return null;
  const seen = wheelFace?.positions.some(
    ({ spacingErrorDeg, swingV }) => spacingErrorDeg !== null || swingV !== null,
  );
  const channels = Object.entries(statistics.channels)
    .map(([name, channel]) => ({ name, facts: channelFacts(channel) }))
    .filter(({ facts }) => facts.length > 0);
  return (
    <Plate role="region" label="Measured" style={{ gap: space.m }}>
      <View
        style={{
          flexDirection: 'row',
          justifyContent: 'space-between',
          alignItems: 'center',
          marginRight: -space.m,
        }}
      >
        <Text heading={2} weight="medium">
          Measured
        </Text>
        <MeasuredTable statistics={statistics} />
      </View>
      {wheelFace && seen ? <CaptureWheel face={wheelFace} sensing={sensing} /> : null}
      <Facts facts={motionFacts(statistics)} />
      {channels.map(({ name, facts }) => (
        <View key={name} style={{ gap: space.xs }}>
          <Text size="small" weight="bold">
            channel {name}
          </Text>
          <Facts facts={facts} />
        </View>
      ))}
      <Text size="tiny" tone="scribeSoft" figures>
        from {statistics.from.toFixed(2)} s to {statistics.to.toFixed(2)} s, the longest stretch without a
        stop, a reversal or a gap
      </Text>
    </Plate>
  );
}

function CaptureWheel({ face, sensing }: { face: Face; sensing: string }) {
  const { scale } = wheelDrawing(face, faceSize / 2 - 4);
  return (
    <View style={{ gap: space.xs }}>
      <WheelFace
        face={{ ...face, angleDeg: null }}
        rpm={null}
        direction="unknown"
        size={faceSize}
        nouns={positionNouns(sensing)}
        past
      />
      <Text size="tiny" tone="scribeSoft" figures>
        spacing error × {scale}, as at the end of the capture
      </Text>
    </View>
  );
}

function MeasuredTable({ statistics }: { statistics: CaptureStatistics }) {
  const { turns, speedOrders, swingOrders } = statistics;
  if (turns.length === 0 && !speedOrders && !swingOrders) return null;
  const rpmOf = turnSpeedText(turns);
  const orders = (label: string, lines: readonly OrderLine[], unit: string) => (
    <Table
      label={label}
      dense
      titled
      rows={lines}
      keyOf={(line) => String(line.order)}
      columns={[
        { title: 'times a turn', numeric: true, cell: (line) => line.order },
        { title: 'amplitude', numeric: true, cell: (line) => amplitudeText(line.amplitude, unit) },
        {
          title: 'phase',
          numeric: true,
          cell: (line) => `${line.phaseDeg.toFixed(0).replace('-', '\u2212')}°`,
        },
      ]}
    />
  );
  return (
    <TableButton title="Measured, as tables">
      {() => (
        <View style={{ gap: space.l }}>
          {speedOrders ? orders('Speed, what repeats with the shaft', speedOrders.lines, 'rpm') : null}
          {swingOrders ? orders('Swing, what repeats with the shaft', swingOrders.lines, 'V') : null}
          <Table
            label="Whole turns"
            dense
            titled
            rows={turns.slice(0, mostRows)}
            keyOf={(turn) => String(turn.t)}
            columns={[
              { title: 'ends at', numeric: true, cell: (turn) => `${turn.t.toFixed(6)} s` },
              { title: 'rpm', numeric: true, cell: (turn) => rpmOf(turn.rpm) },
            ]}
          />
        </View>
      )}
    </TableButton>
  );
}

/** Three figures; small volts as millivolts. */
function amplitudeText(amplitude: number, unit: string): string {
  const [value, shown] = unit === 'V' && amplitude < 0.1 ? [1000 * amplitude, 'mV'] : [amplitude, unit];
  const text = value >= 100 ? value.toFixed(0) : value >= 0.001 ? value.toPrecision(3) : shortNumber(value);
  return `${text} ${shown}`;
}
