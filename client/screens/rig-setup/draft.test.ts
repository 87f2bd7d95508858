import { describe, expect, it } from 'vitest';
import { rig, rigInput } from '@/server/contract';
import { adcScaling } from '@/client/screens/rig-setup/adc';
import { checkDraft, pathOfPointer } from '@/client/screens/rig-setup/check-draft';
import {
  draftOfRig,
  emptyDraft,
  numberOf,
  rigOfDraft,
  type RigDraft,
} from '@/client/screens/rig-setup/draft';
import { channelsFor } from '@/client/screens/rig-setup/roles';

const filled: RigDraft = {
  ...emptyDraft,
  name: 'Vent winch',
  wheel: { ...emptyDraft.wheel, pulsesPerTurn: '60', missingPulses: '2' },
  ratedRpm: '3000',
};

const errorsOf = (draft: RigDraft) => {
  const check = checkDraft(draft);
  return check.ok ? {} : Object.fromEntries(check.errors.map((e) => [e.path, e.message]));
};

describe('the draft of a rig', () => {
  it('comes back as the same rig', () => {
    const stored = rig.parse({
      ...rigInput.parse({
        name: 'Feed screw',
        sensing: 'width-coded',
        wheel: {
          pulsesPerTurn: 24,
          gearRatio: 2.5,
          widthClasses: [
            { widthS: 0.00009, means: 'forward' },
            { widthS: 0.00018, means: 'reverse' },
          ],
        },
        channels: [
          {
            name: 'A',
            role: 'A',
            voltsPerCode: 0.000805664,
            minCode: 0,
            maxCode: 4095,
            maxInputV: 3.3,
            sensor: { kind: 'latch', supplyV: 5, activeLow: true, operateMt: 3, releaseMt: -3 },
          },
        ],
        expectedDirection: 'reverse',
        ratedRpm: 3000,
      }),
      id: 'r1',
      createdAt: '2026-03-01T10:00:00Z',
    });
    const { id, createdAt, ...fields } = stored;
    expect([id, createdAt]).toEqual(['r1', '2026-03-01T10:00:00Z']);
    expect(rigInput.parse(rigOfDraft(draftOfRig(stored)))).toEqual(fields);
  });

  it('passes the contract as it is filled in', () => {
    expect(checkDraft(filled)).toMatchObject({
      ok: true,
      rig: { ratedRpm: 3000, wheel: { pulsesPerTurn: 60 } },
    });
  });

  it('leaves out what the kind of sensor does not have', () => {
    const draft = structuredClone(filled);
    Object.assign(draft.channels[0]!.sensor, { kind: 'latch', quiescentV: '1.65', sensitivityMvPerMt: '30' });
    expect(rigOfDraft(draft).channels[0]?.sensor).toMatchObject({
      quiescentV: null,
      sensitivityMvPerMt: null,
    });
  });
});

describe('errors stand at their fields', () => {
  it('says what to enter', () => {
    const draft = structuredClone(filled);
    Object.assign(draft, { name: ' ', ratedRpm: 'fast' });
    draft.wheel.pulsesPerTurn = '';
    draft.channels[0]!.maxInputV = '0';
    expect(errorsOf(draft)).toEqual({
      name: 'Enter a name.',
      'wheel.pulsesPerTurn': 'Enter a number.',
      'channels.0.maxInputV': 'Must be greater than 0.',
      ratedRpm: 'Enter a number.',
    });
  });

  it('wants whole teeth', () => {
    const draft = structuredClone(filled);
    draft.wheel.pulsesPerTurn = '59.5';
    expect(errorsOf(draft)).toEqual({ 'wheel.pulsesPerTurn': 'Enter a whole number.' });
  });

  it('keeps what concerns the whole list at the list', () => {
    expect(Object.keys(errorsOf({ ...filled, sensing: 'quadrature' }))).toEqual(['channels.root']);
  });

  it('finds the field of a pointer', () => {
    expect(pathOfPointer('/channels/1/sensor/supplyV')).toBe('channels.1.sensor.supplyV');
    expect(pathOfPointer('/wheel/widthClasses/0/widthS')).toBe('wheel.widthClasses.0.widthUs');
    expect(pathOfPointer('/channels')).toBe('channels.root');
    expect(pathOfPointer('/a~1b~0c')).toBe('a/b~c');
  });
});

describe('numberOf', () => {
  it.each([
    ['3.3', 3.3],
    ['3,3', 3.3],
    [' 12 ', 12],
    ['\u22120.5', -0.5],
    ['1e-4', 1e-4],
    ['.5', 0.5],
    ['', null],
    ['1,000.5', Number.NaN],
    ['12V', Number.NaN],
  ])('%j is %d', (text, value) => {
    expect(numberOf(text)).toEqual(value);
  });
});

describe('adcScaling', () => {
  it('gives volts a code, and the ends of the range', () => {
    expect(adcScaling(12, 3.3)).toEqual({
      voltsPerCode: 0.0008056640625,
      codeOffset: 0,
      minCode: 0,
      maxCode: 4095,
    });
  });

  it.each([
    [null, 3.3],
    [12, null],
    [3, 3.3],
    [12.5, 3.3],
    [12, 0],
    [12, Number.NaN],
  ])('has none for %j bits at %j V', (bits, referenceV) => {
    expect(adcScaling(bits, referenceV)).toBeNull();
  });
});

describe('channelsFor', () => {
  const named = (channels: { name: string; role: string }[]) => channels.map((c) => `${c.name}:${c.role}`);

  it('adds the channels that a sensing needs, scaled like the first', () => {
    const first = { ...emptyDraft.channels[0]!, voltsPerCode: '0.0008' };
    const made = channelsFor('quadrature', [first]);
    expect(named(made)).toEqual(['A:A', 'B:B']);
    expect(made[1]?.voltsPerCode).toBe('0.0008');
  });

  it('renames channels that bear the name of their role, and keeps names of people', () => {
    const mine = { ...emptyDraft.channels[0]!, name: 'hall-1' };
    expect(named(channelsFor('three-hall', [mine]))).toEqual(['hall-1:U', 'V:V', 'W:W']);
    expect(named(channelsFor('three-hall', emptyDraft.channels))).toEqual(['U:U', 'V:V', 'W:W']);
  });

  it('loses no channel that has a name of its own', () => {
    const three = channelsFor('three-hall', emptyDraft.channels).map((c, i) => ({ ...c, name: `h${i}` }));
    expect(named(channelsFor('single', three))).toEqual(['h0:A', 'h1:aux', 'h2:aux']);
  });
});
