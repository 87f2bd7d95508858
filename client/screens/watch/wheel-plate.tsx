import { View } from 'react-native';
import { Facts } from '@/client/components/facts';
import type { Fact } from '@/client/components/facts';
import { Plate } from '@/client/components/plate';
import { Table } from '@/client/components/table';
import { Text } from '@/client/components/text';
import { shortNumber } from '@/client/components/finding-words';
import { positionNouns } from '@/client/drawings/count-text';
import { TableButton } from '@/client/drawings/figure';
import { WheelFace } from '@/client/drawings/wheel-face';
import { wheelDrawing } from '@/client/drawings/wheel-geometry';
import type { LiveFrame, Rig } from '@/server/contract';
import { shaftFacts } from '@/client/screens/watch/shaft-facts';
import { clockText } from '@/client/screens/watch/watch-model';
import { space } from '@/client/theme/tokens';

type Face = NonNullable<LiveFrame['wheelFace']>;
type Seen = Pick<Rig, 'sensing' | 'wheel'>;
type WheelPlateProps = { face: Face; live: LiveFrame['live']; rig: Seen; isPast: boolean; size: number };

export function WheelPlate({ face, live, rig, isPast, size }: WheelPlateProps) {
  const { gearRatio } = rig.wheel;
  const { scale } = wheelDrawing(face, size / 2 - 4);
  // Behind a gear the wheel makes turns of its own.
  const turnWord = gearRatio === 1 ? 'turn' : 'shaft turn';
  const turns = live.turns === null ? '' : `${turnWord} ${whole(live.turns)}`;
  const since = live.turnsSince ? ` since ${clockText(live.turnsSince, 'minute')}` : '';
  return (
    <Plate
      role="region"
      label="Wheel face"
      style={{ gap: 0, paddingTop: space.m, paddingBottom: face.numbered ? space.xs : space.m }}
    >
      <WheelFace
        face={isPast ? { ...face, angleDeg: null } : face}
        rpm={isPast || live.speedRpm === null ? null : live.speedRpm * gearRatio}
        direction={live.direction}
        size={size}
        nouns={positionNouns(rig.sensing)}
        past={isPast}
      />
      <View style={{ flexDirection: 'row', alignItems: 'center', gap: space.s, marginRight: -space.m }}>
        <View style={{ flex: 1 }}>
          <Text size="tiny" tone="scribeSoft" figures>
            spacing error × {scale}
          </Text>
          <Text size="tiny" tone="scribeSoft" figures>
            {turns}
            {since}
          </Text>
        </View>
        <TableButton title="Wheel as a table">{() => <WheelTable face={face} />}</TableButton>
      </View>
      {face.numbered ? null : (
        <Text size="tiny" tone="scribeSoft">
          {numberless(rig.sensing)}
        </Text>
      )}
    </Plate>
  );
}

function WheelTable({ face }: { face: Face }) {
  const rows = face.positions.map((p, i) => ({ ...p, number: i + 1 }));
  return (
    <Table
      label="Positions of the wheel"
      dense
      rows={rows}
      keyOf={(p) => String(p.number)}
      columns={[
        { title: face.numbered ? 'position' : 'position (not fixed)', numeric: true, cell: (p) => p.number },
        {
          title: 'spacing error',
          numeric: true,
          cell: (p) => (p.spacingErrorDeg === null ? 'unknown' : `${shortNumber(p.spacingErrorDeg)}°`),
        },
        {
          title: 'swing',
          numeric: true,
          cell: (p) =>
            p.missing ? 'missing tooth' : p.swingV === null ? 'not seen' : `${shortNumber(p.swingV)} V`,
        },
      ]}
    />
  );
}

type NumbersPlateProps = { live: LiveFrame['live']; sensing: Rig['sensing']; isLive: boolean };

/** The numbers behind the picture; only those that are known. */
export function NumbersPlate({ live, sensing, isLive }: NumbersPlateProps) {
  const [position] = positionNouns(sensing);
  const { margin, rates, phaseDeg, channels, delayS } = live;
  const facts: Fact[] = [];
  if (margin) {
    const volts = shortNumber(Number(margin.volts.toFixed(3)));
    const tone = margin.volts < 0 ? { tone: 'warn' as const } : {};
    facts.push({ name: `smallest margin, ${margin.channel}`, value: `${volts} V`, ...tone });
    if (margin.sigmas !== null) facts.push({ name: 'in sigmas of noise', value: signed(margin.sigmas, 1) });
    if (margin.millitesla !== null)
      facts.push({ name: 'in field', value: `${signed(margin.millitesla, 2)} mT` });
  }
  if (rates.toothHz !== null)
    facts.push({ name: `${position} frequency`, value: `${rates.toothHz.toFixed(1)} Hz` });
  if (rates.toothHz && rates.declaredHz)
    facts.push({ name: `samples a ${position}`, value: (rates.declaredHz / rates.toothHz).toFixed(1) });
  if (phaseDeg !== null) facts.push({ name: 'phase A to B', value: `${signed(phaseDeg, 1)}°` });
  if (sensing === 'three-hall' && live.pulses !== null)
    facts.push({ name: 'electrical turns', value: whole(live.pulses) });
  const duties = channels.filter((c) => c.duty !== null);
  if (duties.length > 0)
    facts.push({
      name: `duty ${duties.map((c) => c.channel).join(', ')}`,
      value: duties.map((c) => c.duty!.toFixed(2)).join(', '),
    });
  if (delayS !== null && delayS !== 0)
    facts.push({ name: 'filter delay taken off', value: `${(delayS * 1000).toFixed(2)} ms` });
  if (live.shaft) facts.push(...shaftFacts(live.shaft));
  if (facts.length === 0) return null;
  return (
    <Plate role="region" label="Numbers" style={{ gap: space.xs }}>
      {isLive ? null : (
        <Text size="small" tone="fault">
          not live: as last seen
        </Text>
      )}
      <Facts facts={facts} />
    </Plate>
  );
}

function signed(value: number, digits: number): string {
  return value.toFixed(digits).replace('-', '\u2212');
}

/** Whole ones that are done. */
function whole(count: number): string {
  return String(Math.floor(count)).replace('-', '\u2212');
}

function numberless(sensing: string): string {
  const what = sensing === 'three-hall' ? 'Pole pairs have no numbers' : 'Teeth have no numbers';
  return `${what} of their own: no index, gap or set zero gives them one.`;
}
