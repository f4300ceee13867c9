import { ofetch } from 'ofetch'

interface FakeText { sid: string, direction: 'to-patient' | 'from-patient', from: string, to: string, body: string, status: string, at: string }
interface FakeMail { to: string, subject: string, text: string, at: string, attachments: string[] }
interface FakeState { mode: string, failing: string[], refuseMail: boolean }

/** The control address of the demo's stand-ins. Only the demo has one. */
function control() {
  const baseURL = process.env.DAWNWARD_FAKES_URL
  return baseURL ? ofetch.create({ baseURL, timeout: 5_000, retry: 0 }) : undefined
}

export async function readFakes(): Promise<{ state: FakeState, texts: FakeText[], mails: FakeMail[] } | undefined> {
  const ask = control()
  if (!ask) return undefined
  const [state, texts, mails] = await Promise.all([ask<FakeState>('/control/state'), ask<{ items: FakeText[] }>('/control/texts'), ask<{ items: FakeMail[] }>('/control/mails')])
  return { state, texts: texts.items, mails: mails.items }
}

export async function tellFakes(path: '/control/mode' | '/control/reply', body: Record<string, unknown>): Promise<void> {
  await control()?.(path, { method: 'POST', body })
}
