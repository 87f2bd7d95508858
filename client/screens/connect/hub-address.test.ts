import { describe, expect, it } from 'vitest';
import { firstAddress, hubAddress, isLocalOnly } from '@/client/screens/connect/hub-address';

describe('hubAddress', () => {
  it.each([
    ['192.168.0.12:4680', 'http://192.168.0.12:4680'],
    [' https://lab.example/rigs?x=1 ', 'https://lab.example'],
    ['http://[fe80::1]:4680', 'http://[fe80::1]:4680'],
    ['bench-pc', 'http://bench-pc'],
  ])('%j is %s', (typed, origin) => {
    expect(hubAddress(typed)).toBe(origin);
  });

  it.each([
    '',
    'http://',
    'ftp://lab.example',
    'http://user:pw@lab.example',
    "http://a'b",
    'http://a b',
    '$(reboot)',
  ])('%j is none', (typed) => {
    expect(hubAddress(typed)).toBeNull();
  });
});

describe('isLocalOnly', () => {
  it('knows the addresses of this very machine', () => {
    const local = ['http://localhost:4680', 'http://127.0.0.1', 'http://127.1.2.3:80', 'http://[::1]:4680'];
    expect(local.every(isLocalOnly)).toBe(true);
    expect(['http://192.168.0.12', 'https://localhost.example'].some(isLocalOnly)).toBe(false);
  });
});

describe('firstAddress', () => {
  it('is never localhost where the hub knows better', () => {
    expect(firstAddress('http://localhost:4680', ['http://10.0.0.5:4680'])).toBe('http://10.0.0.5:4680');
    expect(firstAddress('http://localhost:4680', [])).toBe('http://localhost:4680');
    expect(firstAddress('https://lab.example', ['http://10.0.0.5:4680'])).toBe('https://lab.example');
  });
});
