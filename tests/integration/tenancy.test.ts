import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { connect, type Database } from '../../server/db/client.ts';
import { migrateDatabase } from '../../server/db/migrate.ts';
import { withTenant } from '../../server/db/tenant.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { cloneDatabase } from '../support/database.ts';
import { makeSite } from '../support/site.ts';

/** One organisation never sees a byte of another's, whatever a session with its tenant set tries. */
let test: TestApp;
let tables: string[];
const lowmoor = 1;
const fellgate = 2;

beforeAll(async () => {
  test = await startTestApp();
  const site = await makeSite(test, { timeZone: 'Europe/Dublin' });
  await site.upload(
    'job,area,start,finish,quantity\nJ1,Bench,2026-10-24T01:00Z,2026-10-24T05:00Z,4\nJ1,Oven,2026-10-24T06:00Z,,4\n,Bench,2026-10-24T06:00Z,,\n',
  );
  await site.agent
    .patch(`/api/sites/${site.id}/zones/${(await site.zone('Bench')).id}`)
    .send({ servers: 2 })
    .expect(200);
  const { rows } = await test.migrating.execute(sql`
    select c.relname as name, c.relrowsecurity as guarded
    from pg_class as c
    join pg_attribute as a on a.attrelid = c.oid and a.attname = 'organisation_id' and not a.attisdropped
    where c.relkind = 'r' and c.relnamespace = 'public'::regnamespace
    order by 1`);
  tables = rows.filter((row) => row.guarded === true).map((row) => String(row.name));
  const open = rows.filter((row) => row.guarded !== true).map((row) => String(row.name));
  // Read before a tenant is known; each holds nothing of a site's work.
  expect(open).toEqual(['access_key', 'membership', 'site_directory']);
});
afterAll(() => test.close());

const count = async (db: Database, organisation: number, table: string) => {
  const { rows } = await withTenant(db, organisation, (tx) =>
    tx.execute(sql`select count(*)::integer as count from ${sql.identifier(table)}`),
  );
  return Number(rows[0]?.count);
};

/** The columns of a table that can be inserted. */
const columnsOf = async (table: string) => {
  const { rows } = await test.migrating.execute(sql`
    select column_name as name from information_schema.columns
    where table_schema = 'public' and table_name = ${table} and is_generated = 'NEVER'`);
  return sql.join(
    rows.map((row) => sql.identifier(String(row.name))),
    sql`, `,
  );
};

const filledTables = async () => {
  const filled = [];
  for (const table of tables) if ((await count(test.db, lowmoor, table)) > 0) filled.push(table);
  return filled;
};

describe('row-level security', () => {
  it('guards every table of tenants, and the test has rows in most of them', async () => {
    expect(tables.length).toBeGreaterThanOrEqual(18);
    expect(await filledTables()).toEqual(
      expect.arrayContaining([
        'area',
        'area_spelling',
        'audit_entry',
        'flow_day',
        'level_day',
        'level_hour',
        'record',
        'refused_row',
        'site',
        'stay',
        'upload',
        'upload_area',
        'upload_chunk',
        'upload_row',
        'zone',
        'zone_fact',
      ]),
    );
  });

  it('shows Fellgate nothing of Lowmoor, and a session without a tenant nothing at all', async () => {
    for (const table of tables) {
      const { rows } = await withTenant(test.db, fellgate, (tx) =>
        tx.execute(
          sql`select count(*)::integer as count from ${sql.identifier(table)} where organisation_id = ${lowmoor}`,
        ),
      );
      expect([table, rows[0]?.count]).toEqual([table, 0]);
      const bare = await test.db.execute(
        sql`select count(*)::integer as count from ${sql.identifier(table)}`,
      );
      expect([table, bare.rows[0]?.count]).toEqual([table, 0]);
    }
  });

  it('lets Fellgate neither change nor remove anything of Lowmoor', async () => {
    for (const table of tables.filter((each) => each !== 'audit_entry')) {
      const before = await count(test.db, lowmoor, table);
      // The site has its id where others have the site's.
      const column = sql.identifier(table === 'site' ? 'id' : 'site_id');
      const { rowCount: touched } = await withTenant(test.db, fellgate, (tx) =>
        tx.execute(
          sql`update ${sql.identifier(table)} set ${column} = ${column} where organisation_id = ${lowmoor}`,
        ),
      );
      expect([table, touched]).toEqual([table, 0]);
      const removed = await withTenant(test.db, fellgate, (tx) =>
        tx.execute(sql`delete from ${sql.identifier(table)} where organisation_id = ${lowmoor}`),
      );
      expect([table, removed.rowCount]).toEqual([table, 0]);
      expect([table, await count(test.db, lowmoor, table)]).toEqual([table, before]);
    }
  });

  it('lets Fellgate add nothing to Lowmoor, not even a row that Lowmoor has', async () => {
    const tried = [];
    for (const table of tables) {
      const name = sql.identifier(table);
      const { rows } = await test.migrating.execute(
        sql`select to_jsonb(t) as copy from ${name} as t where organisation_id = ${lowmoor} limit 1`,
      );
      if (!rows[0]) continue;
      tried.push(table);
      const columns = await columnsOf(table);
      await expect(
        withTenant(test.db, fellgate, (tx) =>
          tx.execute(sql`insert into ${name} (${columns}) overriding system value
            select ${columns}
            from jsonb_populate_record(null::public.${name}, ${JSON.stringify(rows[0]?.copy)}::jsonb)`),
        ),
        table,
      ).rejects.toMatchObject({ cause: { code: '42501' } });
    }
    expect(tried).toEqual(await filledTables());
    await expect(
      withTenant(test.db, fellgate, (tx) =>
        tx.execute(sql`update site set organisation_id = ${lowmoor}`),
      ),
    ).rejects.toMatchObject({ cause: { code: '42501' } });
  });

  it('hides behind views too', async () => {
    for (const view of ['zone_stay', 'zone_span']) {
      expect(await count(test.db, lowmoor, view)).toBeGreaterThan(0);
      expect(await count(test.db, fellgate, view)).toBe(0);
    }
  });
});

describe("the application's role", () => {
  const fails = (statement: ReturnType<typeof sql>) =>
    expect(test.db.execute(statement)).rejects.toMatchObject({ cause: { code: '42501' } });

  it('owns nothing and cannot bypass row-level security', async () => {
    const { rows } = await test.db.execute(sql`
      select rolsuper, rolbypassrls, rolcreaterole, rolcreatedb,
        (select count(*)::integer from pg_class
          where relowner = pg_roles.oid and relpersistence <> 't') as owns
      from pg_roles where rolname = current_user`);
    expect(rows[0]).toEqual({
      rolsuper: false,
      rolbypassrls: false,
      rolcreaterole: false,
      rolcreatedb: false,
      owns: 0,
    });
  });

  it('reads no secrets, makes no tables, switches no guard off', async () => {
    await fails(sql`select * from server_secret`);
    await fails(sql`create table public.own (id integer)`);
    await fails(sql`alter table zone disable row level security`);
    await fails(sql`select weirmark_login('other', 'word')`);
  });

  it('adds to the audit trail, and changes or removes nothing of it', async () => {
    await expect(
      withTenant(test.db, lowmoor, (tx) => tx.execute(sql`update audit_entry set action = 'x'`)),
    ).rejects.toMatchObject({ cause: { code: '42501' } });
    await expect(
      withTenant(test.db, lowmoor, (tx) => tx.execute(sql`delete from audit_entry`)),
    ).rejects.toMatchObject({ cause: { code: '42501' } });
    // Not even the role that owns it.
    await expect(test.migrating.execute(sql`delete from audit_entry`)).rejects.toMatchObject({
      cause: { message: 'the audit trail only grows' },
    });
  });
});

describe('the audit trail', () => {
  it('has every write with who did it', async () => {
    const { rows } = await withTenant(test.db, lowmoor, (tx) =>
      tx.execute(sql`select distinct action from audit_entry order by action`),
    );
    expect(rows.map((row) => row.action)).toEqual(
      expect.arrayContaining(['site.create', 'upload.create', 'zone.change']),
    );
  });
});

describe('migrating', () => {
  it('two servers that start at once take turns', async () => {
    const database = await cloneDatabase();
    const admin = connect(database.migratingUrl, { max: 1 });
    await admin.execute(sql`drop schema public cascade`);
    await admin.execute(sql`drop schema pgboss cascade`);
    await admin.execute(sql`drop schema drizzle cascade`);
    await admin.execute(sql`create schema public`);
    await admin.$client.end();
    const both = await Promise.all([
      migrateDatabase(database.migratingUrl),
      migrateDatabase(database.migratingUrl),
    ]);
    expect(both[0].applicationUrl).toBe(both[1].applicationUrl);
    const application = connect(both[0].applicationUrl, { max: 1 });
    await application.execute(sql`select count(*) from site_directory`);
    await application.$client.end();
    await database.drop();
  });
});
