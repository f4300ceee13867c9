import { spawn } from 'node:child_process'
import type { ChildProcess } from 'node:child_process'
import { randomBytes } from 'node:crypto'
import { createServer } from 'node:net'
import pg from 'pg'
import { startFakes } from '#mocks/start-fakes'
import type { RunningFakes } from '#mocks/start-fakes'

function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const server = createServer()
    server.on('error', reject)
    server.listen(0, '127.0.0.1', () => {
      const { port } = server.address() as { port: number }
      server.close(() => resolve(port))
    })
  })
}

/** A database of its own, cloned from the template. */
export async function createTestDatabase() {
  const owner = process.env.DAWNWARD_TEST_OWNER_URL ?? ''
  const app = process.env.DAWNWARD_TEST_APP_URL ?? owner
  const name = `test_${randomBytes(8).toString('hex')}`
  const named = (url: string, database: string) => Object.assign(new URL(url), { pathname: `/${database}` }).href
  const admin = async (statement: string) => {
    const client = new pg.Client({ connectionString: named(owner, 'postgres') })
    await client.connect()
    await client.query(statement).finally(() => client.end())
  }
  await admin(`create database ${name} template dawnward_template`)
  const pool = new pg.Pool({ connectionString: named(owner, name), max: 4 })
  pool.on('error', () => undefined)
  return {
    appUrl: named(app, name), ownerUrl: named(owner, name), pool,
    drop: async () => {
      await pool.end()
      await admin(`drop database ${name} with (force)`)
    },
  }
}

/** `pid` is the served process: a test may look at its memory, or end it in the middle of something. */
export interface Product { pid: number, url: string, fakes: RunningFakes, pool: pg.Pool, stop: () => Promise<void>, end: () => Promise<number | null>, log: () => string }

/** The built product on a port of its own, with its own database and its own fakes. A port that another run took meanwhile is tried anew. */
export async function startProduct(settings: Record<string, string> = {}): Promise<Product> {
  for (let tries = 1; ; tries++) {
    try {
      return await startOnce(settings)
    }
    catch (error) {
      if (tries === 3 || !String(error).includes('EADDRINUSE')) throw error
    }
  }
}

async function startOnce(settings: Record<string, string>): Promise<Product> {
  const database = await createTestDatabase()
  const port = await freePort()
  const url = `http://127.0.0.1:${port}`
  const account = `AC${randomBytes(16).toString('hex')}`
  const token = randomBytes(16).toString('hex')
  const fakes = await startFakes({ textPort: 0, mailPort: 0, controlPort: 0, origin: url, account, token })
  const child: ChildProcess = spawn(process.execPath, ['.output/server/index.mjs'], {
    env: { ...process.env, DATABASE_URL: database.appUrl, HOST: '127.0.0.1', PORT: String(port), NITRO_PORT: String(port), DAWNWARD_DEMO: '1', DAWNWARD_ORIGIN: url, NUXT_SESSION_PASSWORD: randomBytes(32).toString('base64url'), DAWNWARD_TEXT_ACCOUNT: account, DAWNWARD_TEXT_TOKEN: token, DAWNWARD_TEXT_HOST: fakes.textUrl, DAWNWARD_MAIL_URL: fakes.mailUrl, DAWNWARD_FAKES_URL: fakes.controlUrl, DAWNWARD_RATE_SCALE: '50', ...settings },
    stdio: ['ignore', 'pipe', 'pipe'],
  })
  let said = ''
  child.stdout?.on('data', (part: Buffer) => said += part.toString())
  child.stderr?.on('data', (part: Buffer) => said += part.toString())
  const stop = async () => {
    child.kill('SIGKILL')
    await fakes.stop()
    await database.drop()
  }
  for (let tries = 0; ; tries++) {
    const answer = await fetch(`${url}/health/ready`).catch(() => undefined)
    if (answer?.ok) break
    if (tries > 120 || child.exitCode !== null) {
      await stop()
      throw new Error(`The product did not start:\n${said.slice(-2000)}`)
    }
    await new Promise(resolve => setTimeout(resolve, 250))
  }
  /** As whoever runs it would: with a request to end, and the code that it ends with. */
  const end = () => new Promise<number | null>((resolve) => {
    child.once('exit', code => resolve(code))
    child.kill('SIGTERM')
  })
  return { pid: child.pid ?? 0, url, fakes, pool: database.pool, stop, end, log: () => said }
}

/** Signs in and answers a caller that carries the session. */
export async function signedIn(product: Product, who: string) {
  const headers = { 'content-type': 'application/json', 'x-dawnward-csrf': '1' }
  const answer = await fetch(`${product.url}/api/people/sign-in`, { method: 'POST', headers, body: JSON.stringify({ email: `${who}@example.org`, password: 'dawn-over-ferncombe' }) })
  if (!answer.ok) throw new Error(`${who} could not sign in: ${answer.status} ${await answer.text()}`)
  const cookie = answer.headers.get('set-cookie')?.split(';')[0] ?? ''
  return async <T = Record<string, unknown>>(path: string, options: { method?: string, body?: unknown } = {}) => {
    const reply = await fetch(`${product.url}${path}`, { method: options.method ?? (options.body === undefined ? 'GET' : 'POST'), headers: { ...headers, cookie }, body: options.body === undefined ? undefined : JSON.stringify(options.body) })
    return { status: reply.status, type: reply.headers.get('content-type') ?? '', body: await reply.json() as T }
  }
}
