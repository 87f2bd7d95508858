/**
 * A process that tests kill: commits numbered samples to a spool for as long as it lives and tells of each commit
 * after it. Sample i of the stream is the number i. Arguments: the data folder, how many commits at most, and whether
 * it also purges.
 */
import { writeSync } from 'node:fs';
import { openDatabases, StorageUnavailableError } from '@/db';
import type { SegmentWrite } from '@/db';

const [dataDir, commitsText, purging] = process.argv.slice(2) as [string, string, string];
const { spool } = openDatabases({ dataDir, durability: 'normal' });
const rowsPerCommit = 8;
const say = (line: string) => writeSync(1, `${line}\n`);

const found = spool.findStream('rig', 'boot');
const streamId =
  found?.streamId ??
  spool.openStream({ rigId: 'rig', name: 'boot', rateHz: 1000, channels: ['A', 'B'], nowMs: 0 });
let next = found?.nextIndex ?? 0;
let seq = found?.nextSeq ?? 0;
say(`open ${next}`);

function segment(startIndex: number): SegmentWrite {
  const count = 2048 + (startIndex % 7) * 512;
  const numbers = Float64Array.from({ length: count }, (_, i) => startIndex + i);
  return {
    streamId,
    startIndex,
    count,
    firstSeq: seq,
    lastSeq: seq,
    timeS: null,
    receivedAtMs: startIndex,
    channels: [
      { name: 'A', samples: numbers },
      { name: 'B', samples: Int32Array.from(numbers) },
    ],
  };
}

try {
  for (let commit = 1; commit <= Number(commitsText); commit++) {
    const segments: SegmentWrite[] = [];
    let at = next;
    for (let row = 0; row < rowsPerCommit; row++) {
      segments.push(segment(at));
      at += segments[row]!.count;
      seq += 1;
    }
    const state = { streamId, nextSeq: seq, nextIndex: at, state: `{"next":${at}}`, lastBlockAtMs: at };
    spool.commit({ segments, early: [], releasedEarly: [], gaps: [], streams: [state] });
    next = at;
    say(`ack ${next}`);
    if (purging === 'purge' && commit % 10 === 0) {
      const before = Math.max(0, next - 300_000);
      say(`purging ${before}`);
      spool.purge(before, 200, []);
    }
  }
  say('done');
} catch (error) {
  if (!(error instanceof StorageUnavailableError)) throw error;
  say(`unavailable ${error.code}`);
  // What was there can still be read, and a purge makes room.
  const held = [...spool.readSegments(streamId, 0, Infinity)].reduce((sum, s) => sum + s.count, 0);
  say(`held ${held} of ${next}`);
  say(`purged ${spool.purge(Infinity, 16, [])}`);
  spool.commit({
    segments: [{ ...segment(next) }],
    early: [],
    releasedEarly: [],
    gaps: [],
    streams: [],
  });
  say('committed again');
}
