/**
 * One case with its findings: `node scripts/run.mjs tests/accuracy/findings/show.ts CODE SEED`; without a seed, how the
 * first twenty went. `clean` instead of a code: a sound rig.
 */
import { caseCodes, type CaseCode } from '@/tests/accuracy/findings/cases';
import { makeClean } from '@/tests/accuracy/findings/clean';
import { drive, type Sight } from '@/tests/accuracy/findings/drive';
import { judge, makeCase, runCase } from '@/tests/accuracy/findings/judge';
import type { Bench } from '@/tests/accuracy/findings/machine';

function main([word, seedText]: string[]): void {
  if (word === 'clean' && seedText !== undefined) {
    const clean = makeClean(Number(seedText));
    describe(clean);
    list(drive(clean, clean.seconds));
    return;
  }
  const code = caseCodes.find((known) => known === word);
  if (!code) {
    print(`which code? clean ${caseCodes.join(' ')}`);
    process.exitCode = 2;
  } else if (seedText === undefined) overview(code);
  else one(code, Number(seedText));
}

function overview(code: CaseCode): void {
  for (let seed = 1; seed <= 20; seed += 1) {
    const { outcome, afterS, gone, others, variant } = runCase(code, seed);
    const after = Number.isNaN(afterS) ? '' : ` after ${afterS.toFixed(1)} s`;
    const stays = gone === false ? ', did not go' : '';
    const beside = others.length > 0 ? `, beside it ${others.join(' ')}` : '';
    print(`${String(seed).padStart(4)} ${outcome}${after}${stays}${beside}  (${variant})`);
  }
}

function one(code: CaseCode, seed: number): void {
  const made = makeCase(code, seed);
  describe(made);
  print(`\n${code}, ${made.variant}: from ${s(made.beginS)}, whole at ${s(made.wholeS)}, to ${s(made.endS)}`);
  print(
    `due by ${s(made.wholeS + made.appearS)}, gone by ${s(made.endS + made.goneS)}, the run ends at ${s(made.seconds)}`,
  );
  for (const fault of made.spec.faults) print(`  ${JSON.stringify(fault)}`);
  const sights = drive(made, made.seconds);
  list(sights);
  print(`\n${JSON.stringify(judge(code, seed, made, sights))}`);
}

function describe({ spec, setup, settings, rigSeed }: Bench): void {
  const { strengths, ...wheel } = spec.wheel;
  print(`${setup.sensing}, ${spec.rateHz} samples a second, rig seed ${rigSeed}`);
  print(`wheel ${JSON.stringify(wheel)}, ${Object.keys(strengths ?? {}).length} strengths`);
  print(`told ${JSON.stringify(setup.wheel)}, expected ${setup.expectedDirection}`);
  for (const channel of spec.channels) print(`channel ${JSON.stringify(channel)}`);
  print(`adc ${JSON.stringify(spec.adc)}, gap ${spec.gapMm.toFixed(2)} mm`);
  print(`settings ${JSON.stringify(settings)}`);
  print(
    `motion from ${spec.motion.startRpm.toFixed(1)} rpm, ripple ${JSON.stringify(spec.motion.ripple ?? [])}`,
  );
  let t = 0;
  for (const { durationS, toRpm } of spec.motion.segments) {
    t += durationS;
    print(`  ${toRpm.toFixed(1)} rpm by ${s(t)}`);
  }
}

function list(sights: readonly Sight[]): void {
  print(sights.length === 0 ? '\nno finding' : '');
  for (const { code, channel, outcome, causedBy, openedS, closedS, last } of sights) {
    const cause = causedBy === null ? '' : `, from ${causedBy}`;
    print(`${s(openedS)} to ${s(closedS)} ${code} ${channel ?? ''} ${last.severity} ${outcome}${cause}`);
    print(`    ${JSON.stringify(last.evidence)}`);
    print(`    ${last.message}`);
  }
}

function s(seconds: number): string {
  return Number.isFinite(seconds) ? `${seconds.toFixed(2)} s` : 'the end';
}

function print(line: string): void {
  process.stdout.write(`${line}\n`);
}

main(process.argv.slice(2));
