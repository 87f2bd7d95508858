/**
 * `npm run accuracy -- [--seed N] [--rounds N] [--only WORD]`: rigs of known truth through the signal path, against the
 * goals. Seeds are fresh in each run; the one printed repeats it exactly. Exit code 1 where a goal is missed.
 */
import { randomInt } from 'node:crypto';
import { optionsOf } from '@/tests/accuracy/arguments';
import { isWanted } from '@/tests/accuracy/section';
import { sections } from '@/tests/accuracy/sections';
import { seedFor } from '@/tests/accuracy/seeds';
import { heading, rowLines, summary } from '@/tests/accuracy/table';

const asked = optionsOf(process.argv.slice(2));
if (!asked.ok) {
  process.stderr.write(`${asked.issue}\n`);
  process.exitCode = 2;
} else {
  const { rounds, only } = asked.value;
  const seed = asked.value.seed ?? randomInt(2 ** 31);
  process.stdout.write(
    `seed ${seed} (repeat this run: npm run accuracy -- --seed ${seed}), rounds ${rounds}\n`,
  );
  let rows = 0;
  const missed: string[] = [];
  for (const section of sections) {
    let isFirst = true;
    const random = (label: string) => seedFor(seed, section.name, label);
    for await (const row of section.run(random, { rounds, only })) {
      if (!isWanted({ rounds, only }, section.name, row.what, row.conditions)) continue;
      if (isFirst) process.stdout.write(heading(section.name));
      isFirst = false;
      rows += 1;
      if (!row.pass) missed.push(`${row.what}; ${row.conditions}`);
      process.stdout.write(rowLines(row));
    }
  }
  process.stdout.write(summary(rows, missed));
  if (rows === 0) process.exitCode = 2;
  else if (missed.length > 0) process.exitCode = 1;
}
