import { stopWith } from './shell.mjs'

/** The application's role and one database, made when missing. `pg` is imported late: it may just have been installed. */
export async function ensureDatabase(cluster, name) {
  const { default: pg } = await import('pg')
  const client = new pg.Client({ connectionString: cluster.ownerUrl('postgres') })
  await client.connect()
  const { rowCount: role } = await client.query('select 1 from pg_roles where rolname = \'dawnward_app\'')
  if (!role) await client.query(`create role dawnward_app login password '${cluster.appPassword}'`)
  const { rowCount: database } = await client.query('select 1 from pg_database where datname = $1', [name])
  if (!database) await client.query(`create database ${name}`)
  await client.end()
}

/** Asks a server that somebody else runs whether it will have us, and says in one sentence why not. */
export async function checkDatabase(url) {
  const { default: pg } = await import('pg')
  const client = new pg.Client({ connectionString: url, connectionTimeoutMillis: 5_000 })
  try {
    await client.connect()
    await client.end()
  }
  catch (error) {
    const host = (() => {
      try {
        return new URL(url).host
      }
      catch {
        return 'the address given'
      }
    })()
    if (error.code === '28P01' || error.code === '28000') stopWith(`The database at ${host} refused the name or password in DATABASE_URL.`)
    if (error.code === '3D000') stopWith(`The database named in DATABASE_URL does not exist at ${host}.`)
    stopWith(`The database at ${host} does not answer (${error.code ?? error.message}). Start it, or correct DATABASE_URL.`)
  }
}
