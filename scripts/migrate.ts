import { migrateDatabase } from '#server/db/migrate'

const url = process.env.DAWNWARD_MIGRATE_URL ?? process.env.DATABASE_URL
if (!url) {
  console.error('Set DATABASE_URL (or DAWNWARD_MIGRATE_URL) to the database to migrate.')
  process.exit(1)
}
await migrateDatabase(url)
console.log('The database is at the newest schema.')
