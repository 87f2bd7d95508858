/** A rig through the signal path, block by block as a board sends them, and the findings that were seen on the way. */
import type { Finding, FindingCode } from '@/signal/model';
import { createPipeline } from '@/signal/pipeline';
import { createRig } from '@/simulator/rig-model';
import type { Bench } from '@/tests/accuracy/findings/machine';

/** One finding as a person at the screen would have seen it; times in seconds of the stream. */
export type Sight = {
  code: FindingCode;
  channel: string | null;
  outcome: Finding['outcome'];
  causedBy: FindingCode | null;
  /** First and last block after which it was open; the second is Infinity where it still is. */
  openedS: number;
  closedS: number;
  last: Finding;
};

/** Ten blocks a second. */
const blockS = 0.1;

export function drive(bench: Bench, seconds: number): Sight[] {
  const { spec, setup, settings, rigSeed } = bench;
  const rig = createRig(spec, rigSeed);
  const { rateHz } = spec;
  const built = createPipeline({ rig: setup, settings, rateHz, channels: rig.channels, startIndex: 0 });
  if (!built.ok) throw new Error(`the case cannot be run: ${built.issue.detail}`);
  const pipeline = built.value;
  const size = Math.max(1, Math.round(blockS * rateHz));
  const sights = new Map<string, Sight>();
  const end = Math.round(seconds * rateHz);
  const losesBlocks = spec.faults.some(({ kind }) => kind === 'lost-blocks');
  for (let at = 0; at < end; at += size) {
    const lost = losesBlocks && rig.faultsAt(rig.timeOf(at)).some(({ kind }) => kind === 'lost-blocks');
    if (lost) pipeline.skip(size, false);
    else pipeline.process(rig.block(at, size), size);
    const nowS = (at + size) / rateHz;
    for (const finding of pipeline.output.closedFindings) see(sights, finding, nowS);
    for (const finding of pipeline.status().findings) see(sights, finding, nowS);
    pipeline.drain();
  }
  return [...sights.values()].sort((a, b) => a.openedS - b.openedS);
}

function see(sights: Map<string, Sight>, finding: Finding, nowS: number): void {
  const { code, channel, outcome, causedBy } = finding;
  const key = `${code} ${channel} ${finding.from}`;
  const known = sights.get(key);
  const closedS = finding.to === null ? Infinity : nowS;
  if (known) Object.assign(known, { outcome, causedBy, closedS, last: finding });
  else sights.set(key, { code, channel, outcome, causedBy, openedS: nowS, closedS, last: finding });
}
