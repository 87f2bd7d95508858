import type { TestChannel, TestSignal } from '@/client/screens/connect/test-signal';

export type SnippetParts = {
  /** `http://192.168.0.12:4680`; nothing after the port. */
  hub: string;
  key: string;
  signal: TestSignal;
  seconds: number;
};

/** For a shell: streams the test signal as JSON blocks in real time, with Node's own `fetch`. */
export function nodeSnippet({ hub, key, signal, seconds }: SnippetParts): string {
  const { rateHz, toothHz, pulsesPerTurn, missingPulses, pulseWidthS, channels } = signal;
  const rows = channels.map((c) => `  ${JSON.stringify(c.name)}: { ${channelMembers(c)} },`).join('\n');
  return `node --input-type=module <<'END'
const hub = '${hub}';
const key = '${key}';
const rate = ${rateHz}, seconds = ${seconds}, toothHz = ${toothHz}, teeth = ${pulsesPerTurn}, missing = ${missingPulses};
const channels = {
${rows}
};
function volts(t, c) {
  const p = toothHz * t + teeth - c.behind, tooth = Math.floor(p) % teeth;
  if (c.oncePerTurn ? tooth !== 0 : tooth >= teeth - missing) return c.rest;
  ${pulseWidthS === null ? 'const hump = (1 - Math.cos(2 * Math.PI * p)) / 2;' : `const hump = (p % 1) / toothHz < ${pulseWidthS} ? 1 : 0;`}
  const x = c.steep ? Math.min(1, Math.max(0, 8 * hump - 3.5)) : hump;
  return c.rest + (c.tooth - c.rest) * x;
}
const stream = 'first-light-' + Date.now(), length = Math.round(rate / 10), start = performance.now();
for (let seq = 0; seq < seconds * 10; seq++) {
  const samples = {};
  for (const [name, c] of Object.entries(channels))
    samples[name] = Array.from({ length }, (_, i) => Number(volts((seq * length + i) / rate, c).toFixed(4)));
  const answer = await fetch(hub + '/ingest/v1/samples', {
    method: 'POST',
    headers: { Authorization: 'Bearer ' + key, 'Content-Type': 'application/json' },
    body: JSON.stringify({ stream, seq, rate, samples }),
  });
  if (!answer.ok) throw new Error(answer.status + ' ' + (await answer.text()));
  if (seq % 10 === 9) console.log((seq + 1) / 10 + ' s sent');
  const dueMs = start + ((seq + 1) * length * 1000) / rate;
  await new Promise((go) => setTimeout(go, Math.max(0, dueMs - performance.now())));
}
END
`;
}

/** For a shell: one second of the test signal, made by awk, posted as CSV. */
export function curlSnippet({ hub, key, signal, seconds }: SnippetParts): string {
  const { rateHz, toothHz, pulsesPerTurn, missingPulses, pulseWidthS, channels } = signal;
  const calls = channels.map(
    (c) => `v(t, ${c.restV}, ${c.toothV}, ${c.behind}, ${c.steep ? 1 : 0}, ${c.oncePerTurn ? 1 : 0})`,
  );
  const hump =
    pulseWidthS === null ? '(1 - cos(2 * pi * p)) / 2' : `(p - int(p)) / toothHz < ${pulseWidthS} ? 1 : 0`;
  return `KEY='${key}'
LC_ALL=C awk 'function v(t, rest, top, behind, steep, once,   p, tooth, x) {
  p = toothHz * t + teeth - behind; tooth = int(p) % teeth
  if (once ? tooth != 0 : tooth >= teeth - missing) return rest
  x = ${hump}
  if (steep) { x = 8 * x - 3.5; x = x < 0 ? 0 : x > 1 ? 1 : x }
  return rest + (top - rest) * x
}
BEGIN {
  pi = atan2(0, -1); rate = ${rateHz}; toothHz = ${toothHz}; teeth = ${pulsesPerTurn}; missing = ${missingPulses}
  print "t,${channels.map((c) => c.name).join(',')}"
  for (i = 0; i < ${seconds} * rate; i++) {
    t = i / rate
    printf "%.6f${',%.4f'.repeat(channels.length)}\\n", t, ${calls.join(', ')}
  }
}' | curl -sS '${hub}/ingest/v1/samples' \\
  -H "Authorization: Bearer $KEY" -H 'Content-Type: text/csv' -H 'Turnmark-Rate: ${rateHz}' \\
  --data-binary @- -w '\\n'
`;
}

function channelMembers(c: TestChannel): string {
  return `rest: ${c.restV}, tooth: ${c.toothV}, behind: ${c.behind}, steep: ${c.steep}, oncePerTurn: ${c.oncePerTurn}`;
}
