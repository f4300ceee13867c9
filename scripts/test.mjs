// `npm test`: set-up (packages, PostgreSQL, Chromium, build), then every test. Ends with the sums on a line of their own.
import { mkdirSync, readFileSync } from 'node:fs'
import { dirname, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'
import { ensureBuild } from './lib/build.mjs'
import { startCluster } from './lib/cluster.mjs'
import { ensureDatabase } from './lib/database.mjs'
import { ensureChromium } from './lib/debian.mjs'
import { ensurePackages } from './lib/packages.mjs'
import { run } from './lib/shell.mjs'

process.chdir(resolve(dirname(fileURLToPath(import.meta.url)), '..'))
ensurePackages()
ensureChromium()
mkdirSync('.data', { recursive: true })
// Test data may be lost in a power cut; without fsync every test file gets its own database in a blink.
const cluster = await startCluster('.data/test-postgres', { settings: { fsync: 'off', synchronous_commit: 'off', full_page_writes: 'off' } })
await ensureDatabase(cluster, 'dawnward_template')
process.env.DAWNWARD_TEST_OWNER_URL = cluster.ownerUrl('dawnward_template')
process.env.DAWNWARD_TEST_APP_URL = cluster.appUrl('dawnward_template')
ensureBuild()

let passed = 0
let failed = 0
let honest = true
const only = process.argv.slice(2)
for (const project of ['unit', 'integration', 'browser']) {
  const report = `.data/report-${project}.json`
  const ok = run('npx', ['vitest', 'run', '--project', project, '--reporter=default', '--reporter=json', `--outputFile.json=${report}`, '--passWithNoTests', ...only])
  honest &&= ok
  try {
    const sums = JSON.parse(readFileSync(report, 'utf8'))
    passed += sums.numPassedTests
    failed += sums.numFailedTests
  }
  catch {
    honest = false
  }
}
if (!cluster.wasRunning) cluster.stop()
console.log(`\n${passed} passed, ${failed} failed`)
process.exit(honest && failed === 0 && passed > 0 ? 0 : 1)
