import { Circle, Line, Svg } from 'react-native-svg';
import { countText } from '@/client/drawings/count-text';
import { wheelMarks } from '@/client/screens/rig-setup/wheel-marks';
import { useColours } from '@/client/theme/use-theme';

type WheelDrawingProps = { pulsesPerTurn: number; missingPulses: number; size: number };

/** The wheel as typed: a mark a tooth, the missing ones left open. */
export function WheelDrawing({ pulsesPerTurn, missingPulses, size }: WheelDrawingProps) {
  const colours = useColours();
  const { marks, everyNth } = wheelMarks(pulsesPerTurn, missingPulses);
  const label =
    `Wheel with ${countText(pulsesPerTurn, 'position')}` +
    (missingPulses > 0 ? `, ${missingPulses} of them missing` : '') +
    (everyNth > 1 ? `; one in ${everyNth} is drawn` : '');
  const width = Math.min(0.07, (1.6 / Math.max(8, marks.length)) * 1.2);
  return (
    <Svg width={size} height={size} viewBox="-1 -1 2 2" role="img" aria-label={label}>
      <Circle r={0.68} fill="none" stroke={colours.hairline} strokeWidth={0.012} />
      {marks.map((mark) => (
        <Line
          key={mark.position}
          x1={mark.sin * 0.72}
          y1={-mark.cos * 0.72}
          x2={mark.sin * 0.94}
          y2={-mark.cos * 0.94}
          stroke={mark.missing ? colours.warn : colours.scribe}
          strokeWidth={mark.missing ? 0.012 : width}
          strokeDasharray={mark.missing ? '0.03 0.03' : undefined}
        />
      ))}
      <Line x1={0} y1={0} x2={0} y2={-0.6} stroke={colours.dye} strokeWidth={0.03} />
    </Svg>
  );
}
