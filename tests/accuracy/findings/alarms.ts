/** False alarms: findings on sound rigs, a rig-hour of simulated time. */
import type { FindingCode } from '@/signal/model';
import { hash32 } from '@/simulator/random';
import { makeClean } from '@/tests/accuracy/findings/clean';
import { drive, type Sight } from '@/tests/accuracy/findings/drive';
import { isWanted, type Row, type Section } from '@/tests/accuracy/section';

const hoursPerRound = 10;
const mostPerHour = 0.1;

type Alarm = { seed: number; kind: string; sight: Sight };

export const alarmSection: Section = {
  name: 'false alarms',
  *run(random, options) {
    if (!isWanted(options, this.name)) return;
    const seed = random('sound rigs');
    const wantedS = 3600 * hoursPerRound * options.rounds;
    const alarms: Alarm[] = [];
    let seconds = 0;
    let rigs = 0;
    for (; seconds < wantedS; rigs += 1) {
      const rigSeed = hash32(seed, rigs) >>> 1;
      const clean = makeClean(rigSeed);
      for (const sight of drive(clean, clean.seconds))
        alarms.push({ seed: rigSeed, kind: clean.kind, sight });
      seconds += clean.seconds;
    }
    const hours = seconds / 3600;
    const found = alarms.filter(({ sight }) => sight.outcome === 'found');
    const unsure = alarms.filter(({ sight }) => sight.outcome === 'cannot-tell');
    for (const code of codesOf(found)) yield rowOf(`false ${code}`, of(found, code), hours, mostPerHour);
    for (const code of codesOf(unsure)) yield rowOf(`cannot tell ${code}`, of(unsure, code), hours, Infinity);
    yield {
      ...rowOf('false alarms, all codes', found, hours, mostPerHour),
      conditions: `${rigs} sound rigs, ${hours.toFixed(1)} rig-hours`,
    };
  },
};

function rowOf(what: string, alarms: readonly Alarm[], hours: number, most: number): Row {
  const perHour = alarms.length / hours;
  const seeds = [...new Set(alarms.map(({ seed }) => seed))];
  const shown = seeds.length > 0 ? ` (${seeds.slice(0, 4).join(' ')}${seeds.length > 4 ? ' …' : ''})` : '';
  return {
    what,
    conditions: [...new Set(alarms.map(({ kind }) => kind))].sort().join('; ') || 'sound rigs',
    goal: most === Infinity ? 'none, for the record' : `under ${most} a rig-hour`,
    measured: `${perHour.toFixed(2)} a rig-hour: ${alarms.length} on ${seeds.length} rigs${shown}`,
    pass: perHour < most,
  };
}

function codesOf(alarms: readonly Alarm[]): FindingCode[] {
  return [...new Set(alarms.map(({ sight }) => sight.code))];
}

function of(alarms: readonly Alarm[], code: FindingCode): Alarm[] {
  return alarms.filter(({ sight }) => sight.code === code);
}
