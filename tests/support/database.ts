import { randomBytes } from 'node:crypto';
import { Client } from 'pg';
import { inject } from 'vitest';
import { templateName } from './cluster.ts';

/** A database of its own, cloned from the migrated template. */
export interface ClonedDatabase {
  migratingUrl: string;
  applicationUrl: string;
  drop(): Promise<void>;
}

const named = (url: string, database: string) => {
  const address = new URL(url);
  address.pathname = `/${database}`;
  return address.href;
};

export async function cloneDatabase(): Promise<ClonedDatabase> {
  const { migratingUrl, applicationUrl } = inject('databases');
  const name = `test_${randomBytes(6).toString('hex')}`;
  const admin = (statement: string) => asAdmin(named(migratingUrl, 'postgres'), statement);
  await admin(`create database ${name} template ${templateName} strategy file_copy`);
  return {
    migratingUrl: named(migratingUrl, name),
    applicationUrl: named(applicationUrl, name),
    drop: () => admin(`drop database ${name} with (force)`),
  };
}

async function asAdmin(url: string, statement: string): Promise<void> {
  const client = new Client({ connectionString: url });
  await client.connect();
  try {
    await client.query(statement);
  } finally {
    await client.end();
  }
}
