import { z } from 'zod'
import { symptomIds } from '#shared/domain/messaging/symptoms'

const words = (max: number) => z.string().trim().min(2, 'Say it in a few words.').max(max)

export const linkParams = z.object({ token: z.string().min(16).max(100).regex(/^[\w-]+$/, 'Not a link.') })
export const openLinkBody = z.strictObject({ birthDate: z.iso.date('Enter the date you were born.') })
export const answerVisitBody = z.strictObject({ visitId: z.uuid(), answer: z.enum(['coming', 'cannot-come']) })
export const symptomsBody = z.strictObject({ symptoms: z.array(z.enum(symptomIds)).max(symptomIds.length), nothingOfThese: z.boolean().default(false) })
  .refine(body => body.nothingOfThese === (body.symptoms.length === 0), { message: 'Choose what is true now, or "Nothing of these".', path: ['symptoms'] })

export const repliesQuery = z.object({ limit: z.coerce.number().int().min(1).max(200).default(100) })
export const writeBody = z.strictObject({ words: words(600), key: z.uuid() })
export const handleReplyBody = z.strictObject({ words: words(500) })
export const settleBody = z.strictObject({ words: words(500) })

export const demoReplyBody = z.strictObject({ from: z.string().regex(/^\+\d{8,15}$/, 'A number such as +447700900377.'), body: z.string().trim().min(1).max(600) })
export const demoModeBody = z.strictObject({ mode: z.enum(['normal', 'slow', 'error', 'rate-limited', 'accepted-no-answer']).optional(), failing: z.array(z.string().max(20)).max(50).optional() })
export const demoClockBody = z.strictObject({ minutes: z.int().min(1).max(60 * 24 * 40) })

export interface LinkPage {
  opened: boolean
  page?: {
    firstName: string
    now: string
    unit: { name: string, phone: string, emergencyPhone: string, address: string, directions: string, zone: string }
    eye: 'right' | 'left'
    visit: { id: string, kind: string, startsAt: string, answered: 'coming' | 'cannot-come' | null } | null
    surgeryAt: string | null
    afterSurgery: boolean
    toldUs: { at: string, route: 'now' | 'today' | 'nurse' | 'none', words: string[] } | null
  }
}
