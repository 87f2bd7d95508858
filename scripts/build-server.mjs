// Bundles the hub and the demo rigs: packages stay outside, our own files become one file each.
import { build } from 'esbuild';

await build({
  entryPoints: { main: 'server/main.ts', 'demo-rigs': 'simulator/demo-main.ts' },
  outdir: 'dist/server',
  outExtension: { '.js': '.mjs' },
  bundle: true,
  packages: 'external',
  platform: 'node',
  target: 'node20',
  format: 'esm',
  sourcemap: 'linked',
  logLevel: 'warning',
});
