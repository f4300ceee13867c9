import { closeDatabase } from '#server/db/client'
import { closeMail } from '#server/gateways/mail'
import { runWorker } from '#server/jobs/run-worker'

const stop = runWorker()
console.log('The worker is running.')

async function end(): Promise<void> {
  await stop()
  closeMail()
  await closeDatabase()
  process.exit(0)
}
process.once('SIGTERM', () => void end())
process.once('SIGINT', () => void end())
