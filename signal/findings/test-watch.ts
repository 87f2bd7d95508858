/** How the tests beside see findings come and go. Not part of the product. */
import type { Finding, RigSetup, SampleArray, Settings } from '@/signal/model';
import { testPipeline } from '@/signal/test-signals';

export type Watched = Finding & {
  /** First look at which it was open, s. */
  openedS: number;
};

/** All findings over the arrays, looked at ten times a second, in the order in which they opened. */
export function watchFindings(
  rig: RigSetup,
  rateHz: number,
  settings: Partial<Settings>,
  ...arrays: SampleArray[]
): Watched[] {
  const pipeline = testPipeline(rig, rateHz, settings);
  const found = new Map<string, Watched>();
  const block = Math.max(1, Math.round(rateHz / 10));
  const note = (finding: Finding, nowS: number): void => {
    const key = `${finding.code} ${finding.channel} ${finding.from}`;
    found.set(key, { ...finding, openedS: found.get(key)?.openedS ?? nowS });
  };
  for (let at = 0; at < arrays[0]!.length; at += block) {
    const count = Math.min(block, arrays[0]!.length - at);
    pipeline.process(
      arrays.map((array) => array.subarray(at, at + count)),
      count,
    );
    const { findings, nowS } = pipeline.status();
    for (const finding of pipeline.output.closedFindings) note(finding, nowS);
    for (const finding of findings) note(finding, nowS);
    pipeline.drain();
  }
  return [...found.values()];
}

export function codesOf(found: readonly Finding[]): string[] {
  return found.map(({ code }) => code);
}
