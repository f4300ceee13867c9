// `npm run bench`: set-up as for the tests, then every figure in one run. Nothing here fails a build; figures are read by people.
import { mkdirSync } from 'node:fs'
import { dirname, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'
import { ensureBuild } from './lib/build.mjs'
import { startCluster } from './lib/cluster.mjs'
import { ensureDatabase } from './lib/database.mjs'
import { ensurePackages } from './lib/packages.mjs'
import { run, stopWith } from './lib/shell.mjs'

process.chdir(resolve(dirname(fileURLToPath(import.meta.url)), '..'))
ensurePackages()
mkdirSync('.data', { recursive: true })
const cluster = await startCluster('.data/test-postgres', { settings: { fsync: 'off', synchronous_commit: 'off', full_page_writes: 'off' } })
await ensureDatabase(cluster, 'dawnward_template')
const env = { ...process.env, DAWNWARD_TEST_OWNER_URL: cluster.ownerUrl('dawnward_template'), DAWNWARD_TEST_APP_URL: cluster.appUrl('dawnward_template') }
ensureBuild()
const ok = run(process.execPath, ['--import', 'tsx', 'tests/bench/template.ts'], { env }) && run(process.execPath, ['--import', 'tsx', 'tests/bench/main.ts'], { env })
if (!cluster.wasRunning) cluster.stop()
if (!ok) stopWith('The bench could not be run.')
