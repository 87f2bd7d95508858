/** Where the hub can be reached. A board never means this machine by `localhost`. */
import { networkInterfaces } from 'node:os';

/** IPv4 addresses of this machine that another one can reach, as URLs; private networks of a lab first. */
export function lanUrls(port: number): string[] {
  const addresses = Object.values(networkInterfaces())
    .flatMap((list) => list ?? [])
    .filter(
      ({ family, internal, address }) => family === 'IPv4' && !internal && !address.startsWith('169.254.'),
    )
    .map(({ address }) => address);
  return [...new Set(addresses)].map((address) => `http://${address}:${port}`);
}
