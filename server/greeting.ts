/** What the person who started the hub reads. */
import { lanUrls } from './addresses';
import type { TurnmarkServer } from './create-server';
import { demoPeople } from './demo/demo-people';

export function greeting({ url, port, context }: TurnmarkServer): string {
  const { config, secrets } = context;
  const lines = ['', `Turnmark is running: ${config.publicUrl?.origin ?? url}`];
  if (config.publicUrl === undefined) {
    lines.push(...lanUrls(port).map((lan) => `  on the network:    ${lan}`));
  }
  if (config.mode === 'demo') {
    lines.push('', 'Demo lab. Sign in with');
    lines.push(...demoPeople.map(({ email, role }) => `  ${email.padEnd(28)} ${role}`));
    lines.push(
      `  password for each: ${secrets.demoPassword}`,
      '',
      'Plain http is for the demo: keep it on a trusted network.',
    );
  }
  lines.push('Ctrl+C ends it. Data folder: ' + config.dataDir, '');
  return lines.join('\n');
}
