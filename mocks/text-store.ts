import { randomBytes } from 'node:crypto'
import type { FakeText, FakeTextMode } from '#mocks/types'

const most = 20_000

/** What the fake text provider has received, in memory and bounded, and how it is told to behave. */
export class TextStore {
  texts: FakeText[] = []
  mode: FakeTextMode = 'normal'
  slowMs = 300
  failing = new Set<string>()
  /** The mail server's: every address is refused. */
  refuseMail = false

  add(text: Omit<FakeText, 'sid' | 'at'>): FakeText {
    const kept = { ...text, sid: `SM${randomBytes(16).toString('hex')}`, at: new Date().toISOString() }
    this.texts.push(kept)
    if (this.texts.length > most) this.texts.splice(0, this.texts.length - most)
    return kept
  }

  reset(): void {
    this.texts = []
    this.mode = 'normal'
    this.failing.clear()
    this.refuseMail = false
  }
}
