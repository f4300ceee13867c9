import { z } from 'zod'
import type { PageWords } from '#shared/domain/messaging/page-words-keys'
import { symptomIds } from '#shared/domain/messaging/symptoms'
import type { SymptomId, SymptomRoute } from '#shared/domain/messaging/symptoms'
import { languages } from '#shared/domain/messaging/vocabulary'
import type { Language } from '#shared/domain/messaging/vocabulary'

const words = (max: number) => z.string().trim().min(2, 'Say it in a few words.').max(max)

export const linkParams = z.object({ token: z.string().min(16).max(100).regex(/^[\w-]+$/, 'Not a link.') })
export const openLinkBody = z.strictObject({ birthDate: z.iso.date('Enter the date you were born.') })
export const answerVisitBody = z.strictObject({ visitId: z.uuid(), answer: z.enum(['coming', 'cannot-come']) })
export const linkQuery = z.object({ language: z.enum(languages).optional().catch(undefined) })
export const symptomsBody = z.strictObject({ symptoms: z.array(z.enum(symptomIds)).max(symptomIds.length), nothingOfThese: z.boolean().default(false), words: z.string().trim().max(600, 'At most 600 letters.').default('') })
  .refine(body => body.nothingOfThese ? body.symptoms.length === 0 : body.symptoms.length > 0 || body.words.length > 1, { message: 'Choose what is true now, or "Nothing of these".', path: ['symptoms'] })

/** What a patient says on their page. */
export type Told = z.input<typeof symptomsBody>

export const repliesQuery = z.object({ limit: z.coerce.number().int().min(1).max(200).default(100) })
const cursor = z.string().regex(/^[\d:.TZ-]{20,30}_[0-9a-f-]{36}$/, 'Not a place in the list.').transform((text) => {
  const [at = '', id = ''] = text.split('_')
  return { dueAt: new Date(at), id }
}).refine(({ dueAt, id }) => !Number.isNaN(dueAt.getTime()) && z.uuid().safeParse(id).success, 'Not a place in the list.')
export const goingOutQuery = z.object({ limit: z.coerce.number().int().min(1).max(200).default(60), after: cursor.optional() })
export const templatesQuery = z.object({ language: z.enum(languages).default('en') })
export const writeBody = z.strictObject({ words: words(600), key: z.uuid() })
export const handleReplyBody = z.strictObject({ words: words(500) })
export const settleBody = z.strictObject({ words: words(500) })

export const demoReplyBody = z.strictObject({ from: z.string().regex(/^\+\d{8,15}$/, 'A number such as +447700900377.'), body: z.string().trim().min(1).max(600) })
export const demoModeBody = z.strictObject({ mode: z.enum(['normal', 'slow', 'error', 'rate-limited', 'accepted-no-answer']).optional(), failing: z.array(z.string().max(20)).max(50).optional(), refuseMail: z.boolean().optional() })
export const demoClockBody = z.strictObject({ minutes: z.int().min(1).max(60 * 24 * 40) })

/** What the patient's page shows, in one language. `words` are all its own words; dates are written already. */
export interface LinkPage {
  opened: boolean
  language: Language
  direction: 'ltr' | 'rtl'
  words: PageWords['words']
  symptoms: { id: SymptomId, words: string }[]
  page?: {
    greeting: string
    expected: string
    about: string
    unit: { name: string, phone: string, address: string, directions: string }
    visit: { id: string, date: string, time: string, stays: string, answered: 'coming' | 'cannot-come' | null } | null
    /** Where this day stands, for the line with three knots. */
    reached: { surgery: boolean, later: string | null }
    afterSurgery: boolean
    toldUs: { at: string, route: SymptomRoute, words: string[], answer: string } | null
  }
}
