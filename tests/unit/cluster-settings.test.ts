import { describe, expect, it } from 'vitest';
import { clusterSettings, usableMegabytes } from '../../server/db/cluster-settings.ts';

const gigabyte = 1024 ** 3;

describe('memory for the local database', () => {
  it.each([
    ["the machine's where nothing limits it", 16 * gigabyte, 0, 16_384],
    ["the machine's where the limit is not told", 16 * gigabyte, undefined, 16_384],
    ["the container's where that is less", 16 * gigabyte, 2 * gigabyte, 2048],
    ["the machine's where the container may use more", 16 * gigabyte, 2 ** 63, 16_384],
  ])('is %s', (_, total, limit, megabytes) => {
    expect(usableMegabytes(total, limit)).toBe(megabytes);
  });
});

describe('settings of the local database', () => {
  it('listen on loopback only, and are complete', () => {
    const settings = clusterSettings('start', 5555);
    expect(settings).toContain("listen_addresses = '127.0.0.1'\n");
    expect(settings).toContain("port = '5555'\n");
    expect(settings).toMatch(/^shared_buffers = '\d+MB'$/m);
    expect(settings).not.toMatch(/NaN|undefined/);
  });
});
