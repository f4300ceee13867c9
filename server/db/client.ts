import { drizzle } from 'drizzle-orm/node-postgres'
import type { NodePgDatabase } from 'drizzle-orm/node-postgres'
import pg from 'pg'
import * as schema from '#server/db/schema/index'

export type Database = NodePgDatabase<typeof schema>
export type Transaction = Parameters<Parameters<Database['transaction']>[0]>[0]
/** A query runs the same in a transaction and outside one. */
export type Queryable = Database | Transaction

let pool: pg.Pool | undefined
let database: Database | undefined

export function openPool(url = process.env.DATABASE_URL): pg.Pool {
  if (!url) throw new Error('DATABASE_URL is not set: the product has no database to use.')
  const opened = new pg.Pool({ connectionString: url, max: Number(process.env.DAWNWARD_POOL ?? 16), application_name: 'dawnward' })
  // An idle connection that dies must not take the process with it; the next query opens another.
  opened.on('error', () => undefined)
  opened.on('connect', client => client.on('error', () => undefined))
  return opened
}

export function usePool(): pg.Pool {
  pool ??= openPool()
  return pool
}

/** The process's one database handle. */
export function useDatabase(): Database {
  database ??= drizzle(usePool(), { schema })
  return database
}

export async function closeDatabase(): Promise<void> {
  const open = pool
  pool = undefined
  database = undefined
  await open?.end()
}
