export type FakeTextMode = 'normal' | 'slow' | 'error' | 'rate-limited' | 'accepted-no-answer'

export interface FakeText { sid: string, direction: 'to-patient' | 'from-patient', from: string, to: string, body: string, status: string, at: string, statusCallback: string | null }
export interface FakeMail { from: string, to: string, subject: string, text: string, at: string, attachments: string[] }
export interface FakeState { mode: FakeTextMode, slowMs: number, failing: string[], texts: number, mails: number, refuseMail: boolean }
