import { drizzle } from 'drizzle-orm/node-postgres'
import { migrate } from 'drizzle-orm/node-postgres/migrator'
import pg from 'pg'

const migrationLock = 720_195

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
    const { rows } = await client.query('select 1 from pg_roles where rolname = \'dawnward_app\'')
    if (rows.length) {
      await client.query(`grant usage on schema public to dawnward_app;
        grant select, insert, update, delete on all tables in schema public to dawnward_app;
        grant usage, select on all sequences in schema public to dawnward_app;
        revoke update, delete, truncate on ${appendOnly.join(', ')} from dawnward_app`)
    }
  }
  finally {
    await client.query('select pg_advisory_unlock($1)', [migrationLock]).catch(() => undefined)
    await client.end()
  }
}
