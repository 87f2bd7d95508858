/**
 * What the kind of a sensor means for count and polarity, in one sentence each. Facts of the trade, common practice; a ring
 * of alternating poles shows them all.
 */
import type { Channel, SensorKind } from '@/signal/model';

export type SensorNote = {
  code: 'counts-both-poles' | 'needs-alternate-poles' | 'open-drain-is-low' | 'linear-has-no-low';
  channel: string;
  detail: string;
};

/** Pulses for each pair of a ring of alternating poles; pulses a turn are that times the pole pairs. */
export function pulsesPerPolePair(kind: SensorKind): number {
  return kind === 'omnipolar' ? 2 : 1;
}

/** Pulses for each magnet of a wheel whose magnets all show the same pole. */
export function pulsesPerLikePole(kind: SensorKind): number {
  return kind === 'latch' ? 0 : 1;
}

type Sensed = Pick<Channel, 'name' | 'role'> & { sensor: Pick<Channel['sensor'], 'kind' | 'activeLow'> };

/** Notes in the order of the channels; none for auxiliary ones, nor where kind and polarity go together as they mostly do. */
export function sensorNotes(channels: readonly Sensed[]): SensorNote[] {
  return channels.flatMap(({ name, role, sensor }): SensorNote[] => {
    if (role === 'aux') return [];
    const notes: SensorNote[] = [];
    const note = (code: SensorNote['code'], detail: string): void => {
      notes.push({ code, channel: name, detail });
    };
    if (pulsesPerPolePair(sensor.kind) > 1) {
      note(
        'counts-both-poles',
        `Channel ${name} is omnipolar and answers to both poles: on a ring of alternating poles it gives two pulses a pole pair, so that pulses a turn are twice the pole pairs.`,
      );
    }
    if (pulsesPerLikePole(sensor.kind) === 0) {
      note(
        'needs-alternate-poles',
        `Channel ${name} is a latch: it lets go only at the other pole, and makes no pulse on a wheel whose magnets all show the same one.`,
      );
    }
    if (sensor.kind !== 'linear' && !sensor.activeLow) {
      note(
        'open-drain-is-low',
        `Channel ${name} is set up as high where the field is; an open-drain output is low there, and needs a pull-up.`,
      );
    }
    if (sensor.kind === 'linear' && sensor.activeLow) {
      note(
        'linear-has-no-low',
        `Channel ${name} is linear: its voltage follows the field, so that active low means nothing for it.`,
      );
    }
    return notes;
  });
}
