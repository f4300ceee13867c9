import { spawn } from 'node:child_process'
import type { ChildProcess } from 'node:child_process'
import { createServer } from 'node:net'
import type { Server } from 'node:net'
import { afterEach, expect, test } from 'vitest'
import { createTestDatabase } from '#tests/support/product'

const running: ChildProcess[] = []
const undo: (() => Promise<unknown>)[] = []
afterEach(async () => {
  for (const child of running.splice(0)) child.kill('SIGKILL')
  for (const step of undo.splice(0)) await step()
})

const listen = (port = 0) => new Promise<Server>((resolve, reject) => {
  const server = createServer()
  server.once('error', reject)
  server.listen(port, '127.0.0.1', () => resolve(server))
})
const portOf = (server: Server) => (server.address() as { port: number }).port
const close = (server: Server) => new Promise(resolve => server.close(resolve))
async function freePort(): Promise<number> {
  const server = await listen()
  const port = portOf(server)
  await close(server)
  return port
}

/** `npm start` as its script, with what it says. Settings of the machine that runs the tests stay out. */
function startWith(env: Record<string, string>) {
  const { PATH, HOME } = process.env
  const child = spawn(process.execPath, ['scripts/start.mjs'], { env: { PATH, HOME, ...env }, stdio: ['ignore', 'pipe', 'pipe'] })
  running.push(child)
  let said = ''
  child.stdout.on('data', (part: Buffer) => said += part.toString())
  child.stderr.on('data', (part: Buffer) => said += part.toString())
  const ended = new Promise<number | null>(resolve => child.once('exit', resolve))
  return { child, ended, said: () => said }
}

test('a start serves the demo, says where it is and who may sign in, and a stop leaves nothing running', async () => {
  const database = await createTestDatabase()
  undo.push(database.drop)
  const port = await freePort()
  const product = startWith({ DATABASE_URL: database.appUrl, DAWNWARD_MIGRATE_URL: database.ownerUrl, PORT: String(port) })
  await expect.poll(product.said, { timeout: 60_000, interval: 100 }).toContain('Stop with Ctrl-C.')
  expect(product.said()).toContain(`http://127.0.0.1:${port}`)
  expect(product.said()).toContain('maren.oxlade@example.org')
  expect((await fetch(`http://127.0.0.1:${port}/health/ready`)).status).toBe(200)
  const children = await childrenOf(product.child.pid ?? 0)
  expect(children.length).toBeGreaterThanOrEqual(2)
  product.child.kill('SIGINT')
  expect(await product.ended).toBe(0)
  expect(children.filter(isAlive)).toEqual([])
  await close(await listen(port))
})

test('a port in use, a database that is not there and a refused password each end the start with one sentence', async () => {
  const taken = await listen()
  undo.push(() => close(taken))
  const port = startWith({ PORT: String(portOf(taken)), DATABASE_URL: 'postgres://nobody@127.0.0.1:1/none' })
  expect(await port.ended).toBe(1)
  expect(port.said().trim()).toBe(`Port ${portOf(taken)} is in use. Stop what uses it, or choose another: PORT=3001 npm start`)

  const dead = startWith({ PORT: String(await freePort()), DATABASE_URL: `postgres://nobody@127.0.0.1:${await freePort()}/none` })
  expect(await dead.ended).toBe(1)
  expect(dead.said()).toMatch(/The database at 127\.0\.0\.1:\d+ does not answer \(ECONNREFUSED\)\. Start it, or correct DATABASE_URL\./)

  const database = await createTestDatabase()
  undo.push(database.drop)
  const wrong = startWith({ PORT: String(await freePort()), DATABASE_URL: Object.assign(new URL(database.appUrl), { password: 'not-this-one' }).href })
  expect(await wrong.ended).toBe(1)
  expect(wrong.said()).toMatch(/refused the name or password in DATABASE_URL\./)
})

test('in production a missing or weak secret refuses to serve', async () => {
  const database = await createTestDatabase()
  undo.push(database.drop)
  const { PATH, HOME } = process.env
  for (const secret of ['', 'short']) {
    const child = spawn(process.execPath, ['.output/server/index.mjs'], { env: { PATH, HOME, NODE_ENV: 'production', DATABASE_URL: database.appUrl, HOST: '127.0.0.1', PORT: String(await freePort()), ...(secret ? { NUXT_SESSION_PASSWORD: secret } : {}) }, stdio: ['ignore', 'pipe', 'pipe'] })
    running.push(child)
    let said = ''
    child.stderr.on('data', (part: Buffer) => said += part.toString())
    child.stdout.on('data', (part: Buffer) => said += part.toString())
    expect(await new Promise(resolve => child.once('exit', resolve))).not.toBe(0)
    expect(said).toContain('NUXT_SESSION_PASSWORD')
  }
})

/** Every process below this one, as /proc tells it. */
async function childrenOf(pid: number): Promise<number[]> {
  const { readFile } = await import('node:fs/promises')
  const text = await readFile(`/proc/${pid}/task/${pid}/children`, 'utf8')
  const direct = text.trim().split(' ').filter(Boolean).map(Number)
  const further = await Promise.all(direct.map(childrenOf))
  return [...direct, ...further.flat()]
}
function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0)
    return true
  }
  catch {
    // No such process: it has ended.
    return false
  }
}
