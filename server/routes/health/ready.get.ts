import { sql } from 'drizzle-orm'
import { useDatabase } from '#server/db/client'
import { definePublicApi } from '#server/utils/api'
import { DomainError } from '#shared/domain/errors'

// Public: a load balancer asks it. It says only yes or no.
export default definePublicApi({}, async ({ event }) => {
  try {
    await useDatabase().execute(sql`select 1`)
    return { ready: true }
  }
  catch {
    event.node.res.statusCode = 503
    throw new DomainError('server.not-ready', 'The database does not answer.')
  }
})
