import { drizzle } from 'drizzle-orm/node-postgres'
import { migrate } from 'drizzle-orm/node-postgres/migrator'
import { Logger, runMigrations } from 'graphile-worker'
import pg from 'pg'

const migrationLock = 720_195
const quiet = new Logger(() => () => undefined)

const appendOnly = ['pathway_events', 'escalation_actions', 'message_events', 'missing_steps', 'audit_rows',
  'reviews', 'lens_plans', 'consents', 'operation_notes', 'risk_assessments', 'symptom_checks']

/**
 * Brings the database at `url` to the newest schema. One process at a time holds the advisory lock; the others
 * wait and find nothing left to do. The application's role, when the cluster has one, may not change history.
 */
export async function migrateDatabase(url: string, folder = 'drizzle'): Promise<void> {
  const client = new pg.Client({ connectionString: url })
  await client.connect()
  try {
    await client.query('select pg_advisory_lock($1)', [migrationLock])
    await migrate(drizzle(client), { migrationsFolder: folder })
    await runMigrations({ connectionString: url, logger: quiet })
    const { rows } = await client.query('select 1 from pg_roles where rolname = \'dawnward_app\'')
    if (rows.length) {
      await client.query(`grant usage on schema public to dawnward_app;
        grant select, insert, update, delete on all tables in schema public to dawnward_app;
        grant usage, select on all sequences in schema public to dawnward_app;
        revoke update, delete, truncate on ${appendOnly.join(', ')} from dawnward_app`)
      await openChores(client)
    }
  }
  finally {
    await client.query('select pg_advisory_unlock($1)', [migrationLock]).catch(() => undefined)
    await client.end()
  }
}

/** The queue of chores belongs to the owner and hides its rows from everybody else; the application's role works them. */
async function openChores(client: pg.Client): Promise<void> {
  await client.query(`grant usage on schema graphile_worker to dawnward_app;
    grant select, insert, update, delete on all tables in schema graphile_worker to dawnward_app;
    grant usage, select on all sequences in schema graphile_worker to dawnward_app;
    grant execute on all functions in schema graphile_worker to dawnward_app`)
  const { rows } = await client.query<{ name: string }>(`select c.relname as name from pg_class c join pg_namespace n on n.oid = c.relnamespace
    where n.nspname = 'graphile_worker' and c.relrowsecurity and not exists (select 1 from pg_policy p where p.polrelid = c.oid)`)
  for (const { name } of rows) await client.query(`create policy dawnward_app on graphile_worker.${name} to dawnward_app using (true) with check (true)`)
}
