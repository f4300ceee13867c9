import { closeDatabase, useDatabase } from '#server/db/client'
import { seedDemo } from '#server/db/seed/index'
import { now } from '#server/utils/clock'

const result = await seedDemo(useDatabase(), now())
console.log(result === 'loaded' ? 'The demo scenario is loaded.' : 'The database already has its data; nothing was changed.')
await closeDatabase()
