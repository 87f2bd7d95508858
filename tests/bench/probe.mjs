// Loaded into a measured process before its program: answers with its own CPU time, memory and event-loop blocks.
import { monitorEventLoopDelay } from 'node:perf_hooks';

const resolutionMs = 1;
const delays = monitorEventLoopDelay({ resolution: resolutionMs });
delays.enable();

process.on('message', (message) => {
  if (message !== 'probe') return;
  const { user, system } = process.cpuUsage();
  const { rss, heapUsed } = process.memoryUsage();
  const answer = {
    cpuUs: user + system,
    rssMb: rss / 2 ** 20,
    heapMb: heapUsed / 2 ** 20,
    worstBlockMs: Math.max(0, delays.max / 1e6 - resolutionMs),
  };
  delays.reset();
  process.send(answer);
});
process.channel?.unref();
