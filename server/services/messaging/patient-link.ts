import type { Transaction } from '#server/db/client'
import { patientLinks } from '#server/db/schema/index'
import { hashSecret, newSecret } from '#server/services/people/tokens'

const linkDays = 60

/** The address that links in messages lead to. */
export function origin(): string {
  return process.env.DAWNWARD_ORIGIN ?? 'http://127.0.0.1:3000'
}

/** A link that opens this patient's own page. Only its hash is kept, so a stolen table opens nothing. */
export async function makeLink(tx: Transaction, input: { patientId: string, pathwayId: string | null, visitId: string | null, language?: string, now: Date }): Promise<string> {
  const token = newSecret()
  await tx.insert(patientLinks).values({ tokenHash: hashSecret(token), patientId: input.patientId, pathwayId: input.pathwayId, visitId: input.visitId, createdAt: input.now, expiresAt: new Date(input.now.getTime() + linkDays * 86_400_000) })
  // The language stands in the address, for the page asks the birth date before it may know whose it is.
  return `${origin()}/v/${token}${input.language && input.language !== 'en' ? `?l=${input.language}` : ''}`
}
