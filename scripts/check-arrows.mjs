// Checks the import arrows of the architecture: which room may import which. Prints each breach, exits 1 on any.
import { readFileSync, readdirSync, statSync } from 'node:fs';
import { dirname, join, relative, resolve } from 'node:path';
import { root } from './lib.mjs';

const rooms = {
  app: ['client'],
  client: ['signal', 'server/contract'],
  'server/contract': ['signal'],
  server: ['ingest', 'signal', 'db', 'server/contract'],
  ingest: ['signal'],
  signal: [],
  db: ['signal'],
  simulator: ['ingest/block.ts'],
};
// Pure rooms: which packages they may use at all.
const packages = { signal: ['fili'], 'server/contract': ['zod'], db: ['kysely', 'better-sqlite3', 'zod'] };
const typesOnly = { db: ['signal'] };

function roomOf(path) {
  return Object.keys(rooms)
    .filter((room) => path === room || path.startsWith(`${room}/`))
    .sort((a, b) => b.length - a.length)[0];
}

function files(folder) {
  return readdirSync(folder).flatMap((name) => {
    const path = join(folder, name);
    return statSync(path).isDirectory() ? files(path) : /\.tsx?$/.test(name) ? [path] : [];
  });
}

const importLine =
  /(?:^|\n)\s*(import|export)\s+(type\s+)?(?:[^'";]*?\sfrom\s+)?['"]([^'"]+)['"]|import\(\s*['"]([^'"]+)['"]\s*\)/g;
let breaches = 0;
for (const top of new Set(Object.keys(rooms).map((r) => r.split('/')[0]))) {
  for (const path of files(join(root, top))) {
    const from = relative(root, path);
    if (/\.test\.tsx?$/.test(from)) continue;
    const room = roomOf(from);
    for (const match of readFileSync(path, 'utf8').matchAll(importLine)) {
      const name = match[3] ?? match[4];
      const ours = name.startsWith('@/')
        ? name.slice(2)
        : name.startsWith('.')
          ? relative(root, resolve(dirname(path), name))
          : null;
      const say = (why) => {
        breaches += 1;
        console.error(`${from}: may not import ${name} (${why})`);
      };
      if (ours === null) {
        const allowed = packages[room];
        const bare = name.startsWith('@') ? name.split('/').slice(0, 2).join('/') : name.split('/')[0];
        if (allowed && !allowed.includes(bare) && !(room === 'db' && name.startsWith('node:')))
          say(`${room} uses only ${allowed.join(', ')}`);
        continue;
      }
      const target = roomOf(ours);
      if (target === room || target === undefined) continue;
      const open = rooms[room].some((r) => r === target || ours === r || `${ours}.ts` === r);
      if (!open) say(`${room} imports only ${rooms[room].join(', ') || 'nothing of ours'}`);
      if (typesOnly[room]?.includes(target) && !match[2]) say(`${room} takes types of ${target} only`);
    }
  }
}
if (breaches > 0) process.exit(1);
console.log('import arrows: all right');
