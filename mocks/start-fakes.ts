import type { Server } from 'node:http'
import { createMiddleware } from '@mswjs/http-middleware'
import express from 'express'
import { SMTPServer } from 'smtp-server'
import { textHandlers } from '#mocks/handlers'
import { postSigned } from '#mocks/signature'
import { TextStore } from '#mocks/text-store'
import type { FakeMail, FakeState } from '#mocks/types'

export interface FakesOptions { textPort: number, mailPort: number, controlPort: number, origin: string, account: string, token: string }
export interface RunningFakes { textUrl: string, mailUrl: string, controlUrl: string, store: TextStore, mails: FakeMail[], refuseMail: boolean, stop: () => Promise<void> }

const mostMails = 5_000

/** Starts the fake text provider, the fake mail server and their control address, all on loopback. Port 0 takes a free one. */
export async function startFakes(options: FakesOptions): Promise<RunningFakes> {
  const store = new TextStore()
  const mails: FakeMail[] = []
  const textApp = express()
  textApp.disable('x-powered-by')
  textApp.use(express.text({ type: () => true, limit: '200kb' }))
  // A dropped connection, not an error body: the caller cannot know whether the text was taken.
  textApp.use((request, response, next) => {
    if (store.mode !== 'accepted-no-answer' || request.method !== 'POST') return next()
    const send = response.end.bind(response)
    response.end = ((...given: Parameters<typeof send>) => {
      request.socket.destroy()
      // The mocked network error carries the status 0, which cannot be written even to a connection that is gone.
      response.statusCode = 500
      return send(...given)
    }) as typeof response.end
    next()
  })
  textApp.use(createMiddleware(...textHandlers({ store, account: options.account, token: options.token, base: '*' })))
  const text = await listen(textApp, options.textPort)
  const mail = await startMail(mails, options.mailPort, () => store.refuseMail)
  const control = await listen(controlApp(options, store, mails), options.controlPort)
  return {
    textUrl: `http://127.0.0.1:${text.port}`, mailUrl: `smtp://127.0.0.1:${mail.port}`, controlUrl: `http://127.0.0.1:${control.port}`, store, mails,
    get refuseMail() {
      return store.refuseMail
    },
    set refuseMail(refuse: boolean) {
      store.refuseMail = refuse
    },
    stop: async () => {
      await Promise.all([text.stop(), control.stop(), mail.stop()])
    },
  }
}

function listen(app: express.Express, port: number): Promise<{ port: number, stop: () => Promise<void> }> {
  return new Promise((resolve, reject) => {
    const server: Server = app.listen(port, '127.0.0.1', () => resolve({
      port: (server.address() as { port: number }).port,
      stop: () => new Promise((done) => {
        server.closeAllConnections()
        server.close(() => done())
      }),
    }))
    server.on('error', reject)
  })
}

function startMail(mails: FakeMail[], port: number, refuses: () => boolean): Promise<{ port: number, stop: () => Promise<void> }> {
  const server = new SMTPServer({
    authOptional: true, disabledCommands: ['STARTTLS', 'AUTH'],
    onRcptTo(_address, _session, done) {
      done(refuses() ? Object.assign(new Error('5.1.1 no such mailbox'), { responseCode: 550 }) : undefined)
    },
    onData(stream, session, done) {
      const parts: Buffer[] = []
      stream.on('data', (part: Buffer) => parts.push(part))
      stream.on('end', () => {
        mails.push(readMail(Buffer.concat(parts).toString('utf8'), session.envelope.rcptTo.map(each => each.address).join(', ')))
        if (mails.length > mostMails) mails.shift()
        done()
      })
    },
  })
  server.on('error', () => undefined)
  return new Promise((resolve, reject) => {
    server.server.once('error', reject)
    server.listen(port, '127.0.0.1', () => resolve({ port: (server.server.address() as { port: number }).port, stop: () => new Promise(done => server.close(() => done())) }))
  })
}

/** Enough of a mail for a person to read it: subject, plain text and names of attachments. */
function readMail(raw: string, to: string): FakeMail {
  const split = raw.indexOf('\r\n\r\n')
  const head = raw.slice(0, split).replace(/\r\n[ \t]+/g, ' ')
  const header = (name: string) => head.match(new RegExp(`^${name}: (.*)$`, 'im'))?.[1]?.trim() ?? ''
  const encoding = header('Content-Transfer-Encoding')
  const attachments = [...raw.matchAll(/filename="?([^";\r\n]+)/g)].map(found => found[1] ?? '')
  return { from: header('From'), to, subject: decodeWords(header('Subject')), text: decodeBody(raw.slice(split + 4), encoding).trim(), at: new Date().toISOString(), attachments }
}

function decodeBody(body: string, encoding: string): string {
  if (/base64/i.test(encoding)) return Buffer.from(body, 'base64').toString('utf8')
  if (!/quoted-printable/i.test(encoding)) return body
  const bytes = body.replace(/=\r\n/g, '').replace(/=([0-9A-F]{2})/g, (_, hex: string) => String.fromCharCode(Number.parseInt(hex, 16)))
  return Buffer.from(bytes, 'latin1').toString('utf8')
}

function decodeWords(text: string): string {
  return text.replace(/=\?utf-8\?([bq])\?([^?]*)\?=\s*/gi, (_, kind: string, words: string) => kind.toLowerCase() === 'b' ? Buffer.from(words, 'base64').toString('utf8') : decodeBody(words.replaceAll('_', ' '), 'quoted-printable'))
}

function controlApp(options: FakesOptions, store: TextStore, mails: FakeMail[]): express.Express {
  const app = express()
  app.use(express.json({ limit: '50kb' }))
  app.get('/control/state', (_request, response) => void response.json({ mode: store.mode, slowMs: store.slowMs, failing: [...store.failing], texts: store.texts.length, mails: mails.length, refuseMail: store.refuseMail } satisfies FakeState))
  app.get('/control/texts', (_request, response) => void response.json({ items: store.texts.slice(-500) }))
  app.get('/control/mails', (_request, response) => void response.json({ items: mails.slice(-200) }))
  app.post('/control/mode', (request, response) => {
    const { mode, slowMs, failing, refuseMail } = request.body as { mode?: TextStore['mode'], slowMs?: number, failing?: string[], refuseMail?: boolean }
    if (mode) store.mode = mode
    if (typeof slowMs === 'number') store.slowMs = Math.min(60_000, Math.max(0, slowMs))
    if (failing) store.failing = new Set(failing)
    if (typeof refuseMail === 'boolean') store.refuseMail = refuseMail
    response.json({ mode: store.mode })
  })
  app.post('/control/reset', (_request, response) => {
    store.reset()
    mails.length = 0
    response.json({ reset: true })
  })
  app.post('/control/reply', async (request, response) => {
    const { from, body } = request.body as { from: string, body: string }
    const text = store.add({ direction: 'from-patient', from, to: '+447700900000', body, status: 'received', statusCallback: null })
    const status = await postSigned(options.token, `${options.origin}/webhooks/text/inbound`, { MessageSid: text.sid, SmsSid: text.sid, AccountSid: options.account, From: from, To: text.to, Body: body, NumMedia: '0', NumSegments: '1', ApiVersion: '2010-04-01' })
    response.json({ sid: text.sid, status })
  })
  return app
}
