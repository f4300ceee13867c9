// `npm start`: everything from a bare Debian with Node.js to a served product. Only Node's own modules until the packages are there.
import { randomBytes } from 'node:crypto'
import { existsSync, mkdirSync, readFileSync, statfsSync, writeFileSync } from 'node:fs'
import { dirname, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'
import { ensureBuild } from './lib/build.mjs'
import { freePort, isFree, startCluster } from './lib/cluster.mjs'
import { checkDatabase, ensureDatabase } from './lib/database.mjs'
import { ensurePackages } from './lib/packages.mjs'
import { run, start, stopWith } from './lib/shell.mjs'

process.chdir(resolve(dirname(fileURLToPath(import.meta.url)), '..'))
const isDev = process.argv.includes('--dev')
const children = []
let cluster
let ending = false

function end(code) {
  if (ending) return
  ending = true
  const alive = children.filter(child => child.exitCode === null && child.signalCode === null)
  for (const child of alive) child.kill('SIGTERM')
  Promise.race([Promise.all(alive.map(child => new Promise(done => child.once('exit', done)))), new Promise(done => setTimeout(done, 8_000))]).then(() => {
    if (cluster && !cluster.wasRunning) cluster.stop()
    process.exit(code)
  })
}
process.on('SIGINT', () => end(0))
process.on('SIGTERM', () => end(0))

if (statfsSync('.').bavail * statfsSync('.').bsize < 500_000_000 && !existsSync('node_modules')) stopWith('There is not enough room on the disk: Dawnward needs about 1 GB.')
const hasEnv = existsSync('.env')
if (hasEnv) process.loadEnvFile('.env')
const env = process.env
const port = Number(env.PORT ?? env.NITRO_PORT ?? 3000)
if (!await isFree(port)) stopWith(`Port ${port} is in use. Stop what uses it, or choose another: PORT=3001 npm start`)
ensurePackages()
mkdirSync('.data', { recursive: true })

env.DAWNWARD_ORIGIN ??= `http://127.0.0.1:${port}`
if (!hasEnv) {
  // A demo of its own: secrets made once and kept in the private data folder.
  env.DAWNWARD_DEMO ??= '1'
  if (env.DAWNWARD_DEMO === '1') {
    const file = '.data/secrets.json'
    if (!existsSync(file)) writeFileSync(file, JSON.stringify({ session: randomBytes(32).toString('base64url'), account: `AC${randomBytes(16).toString('hex')}`, token: randomBytes(16).toString('hex') }), { mode: 0o600 })
    const secrets = JSON.parse(readFileSync(file, 'utf8'))
    env.NUXT_SESSION_PASSWORD ??= secrets.session
    env.DAWNWARD_TEXT_ACCOUNT ??= secrets.account
    env.DAWNWARD_TEXT_TOKEN ??= secrets.token
  }
}
const demo = env.DAWNWARD_DEMO === '1'

if (env.DATABASE_URL) await checkDatabase(env.DATABASE_URL)
else {
  cluster = await startCluster('.data/postgres')
  await ensureDatabase(cluster, 'dawnward')
  env.DATABASE_URL = cluster.appUrl('dawnward')
  env.DAWNWARD_MIGRATE_URL = cluster.ownerUrl('dawnward')
}
if (!run('npx', ['tsx', 'scripts/migrate.ts'], { stdio: ['ignore', 'ignore', 'inherit'] })) stopAll('The database could not be brought to the newest schema.')
if (demo && !run('npx', ['tsx', 'scripts/seed.ts'], { stdio: ['ignore', 'ignore', 'inherit'] })) stopAll('The demo scenario could not be loaded.')

if (demo) {
  const [text, mail, control] = [await freePort(), await freePort(), await freePort()]
  Object.assign(env, { DAWNWARD_FAKE_TEXT_PORT: text, DAWNWARD_FAKE_MAIL_PORT: mail, DAWNWARD_FAKE_CONTROL_PORT: control, DAWNWARD_TEXT_HOST: `http://127.0.0.1:${text}`, DAWNWARD_MAIL_URL: `smtp://127.0.0.1:${mail}`, DAWNWARD_FAKES_URL: `http://127.0.0.1:${control}` })
  launch(process.execPath, ['--import', 'tsx', 'mocks/main.ts'], { stdio: ['ignore', 'ignore', 'inherit'] })
}
if (!isDev) ensureBuild()
Object.assign(env, { HOST: '127.0.0.1', NITRO_HOST: '127.0.0.1', PORT: String(port), NITRO_PORT: String(port) })
launch(...(isDev ? [process.execPath, ['node_modules/nuxt/bin/nuxt.mjs', 'dev', '--port', String(port), '--host', '127.0.0.1']] : [process.execPath, ['.output/server/index.mjs']]), { stdio: ['ignore', isDev ? 'inherit' : 'ignore', 'inherit'] })
await answers(`http://127.0.0.1:${port}/health/ready`)
console.log(`\nDawnward is at http://127.0.0.1:${port}`)
if (demo) {
  const { password, accounts } = JSON.parse(readFileSync('server/db/seed/accounts.json', 'utf8'))
  console.log(`Demo accounts, all with the password "${password}":`)
  for (const account of accounts) console.log(`  ${account.title.padEnd(22)} ${account.email}`)
}
console.log('Stop with Ctrl-C.')

// Programs themselves, never a wrapper such as npx: a wrapper that is told to end leaves its child behind.
function launch(command, args, options) {
  const child = start(command, args, options)
  children.push(child)
  child.once('exit', (code) => {
    if (!ending) stopAll(`${args.at(-1)} ended by itself (${code}).`)
  })
}

function stopAll(sentence) {
  console.error(`\n${sentence}`)
  end(1)
}

async function answers(url) {
  for (let tries = 0; tries < 240 && !ending; tries++) {
    const answer = await fetch(url).catch(() => undefined)
    if (answer?.ok) return
    await new Promise(done => setTimeout(done, 250))
  }
  if (!ending) stopAll('The server did not become ready within a minute.')
}
