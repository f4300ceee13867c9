import pg from 'pg'
import { drizzle } from 'drizzle-orm/node-postgres'
import { migrateDatabase } from '#server/db/migrate'
import * as schema from '#server/db/schema/index'
import { seedDemo } from '#server/db/seed/index'

/** The template that every test database is cloned from: newest schema, demo scenario loaded round the present. */
export default async function setUp(): Promise<void> {
  const owner = process.env.DAWNWARD_TEST_OWNER_URL
  if (!owner) throw new Error('Run `npm test`: it starts the test cluster that these tests need.')
  const admin = new URL(owner)
  admin.pathname = '/postgres'
  const client = new pg.Client({ connectionString: admin.href })
  await client.connect()
  await client.query('drop database if exists dawnward_template with (force)')
  await client.query('create database dawnward_template')
  await client.end()
  await migrateDatabase(owner)
  const pool = new pg.Pool({ connectionString: owner, max: 2 })
  await seedDemo(drizzle(pool, { schema }), new Date())
  await pool.end()
}
