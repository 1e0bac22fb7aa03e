import os from 'node:os';
import type { ClusterKind } from './cluster-folder.ts';

const megabyte = 1024 * 1024;

/**
 * Memory of this machine, or of the container we are in.
 *
 * @param limit bytes that a container may use; 0 or absent where nothing limits it
 */
export const usableMegabytes = (total: number, limit: number | undefined): number =>
  Math.floor(Math.min(total, limit || total) / megabyte);

/** Settings of a cluster: loopback only, and memory fit for analysis on a small machine. */
export function clusterSettings(kind: ClusterKind, port: number): string {
  // Node.js 20 before 20.13 may answer nothing.
  const limit = process.constrainedMemory() as number | undefined;
  const memory = usableMegabytes(os.totalmem(), limit);
  const settings: Record<string, string> = {
    listen_addresses: '127.0.0.1',
    port: String(port),
    unix_socket_directories: '',
    max_connections: '60',
    shared_buffers: `${Math.max(64, Math.min(1024, Math.floor(memory / 4)))}MB`,
    effective_cache_size: `${Math.max(128, Math.floor(memory / 2))}MB`,
    work_mem: '32MB',
    maintenance_work_mem: '256MB',
    max_wal_size: '4GB',
    random_page_cost: '1.1',
    jit: 'off',
    // Containers often have 64 MB in /dev/shm, too little for what parallel plans share.
    dynamic_shared_memory_type: 'sysv',
    timezone: 'UTC',
    log_timezone: 'UTC',
    password_encryption: 'scram-sha-256',
    client_min_messages: 'warning',
    ...(kind === 'test' ? forgetful : {}),
  };
  return Object.entries(settings)
    .map(([name, value]) => `${name} = '${value}'\n`)
    .join('');
}

/** A test's cluster is thrown away: nothing of it has to outlive a power cut. */
const forgetful = {
  fsync: 'off',
  synchronous_commit: 'off',
  full_page_writes: 'off',
  autovacuum: 'off',
  wal_level: 'minimal',
  max_wal_senders: '0',
  max_connections: '120',
};
