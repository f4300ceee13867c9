import { eq, sql } from 'drizzle-orm'
import { patientLinks, patients } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import type { SystemContext } from '#server/services/context'
import { hashSecret } from '#server/services/people/tokens'
import { DomainError } from '#shared/domain/errors'

const mostTries = 5
const lockMs = 60 * 60_000

/**
 * Opens a patient's link with the birth date. A guessed link, an old one, a locked one and a wrong date answer the same, so
 * that nobody learns from the answer whether a link exists. Five wrong dates lock it for an hour, whoever tried.
 */
export async function openLink(ctx: SystemContext, input: { token: string, birthDate: string }): Promise<{ linkId: string }> {
  // The outcome is returned, not thrown, inside the transaction: a failed try must stay counted.
  const linkId = await ctx.db.transaction(async (tx) => {
    const [row] = await tx.select({ link: patientLinks, patient: patients }).from(patientLinks).innerJoin(patients, eq(patients.id, patientLinks.patientId))
      .where(eq(patientLinks.tokenHash, hashSecret(input.token))).for('update', { of: patientLinks })
    if (!row || row.link.closedAt || row.link.expiresAt <= ctx.now || (row.link.lockedUntil && row.link.lockedUntil > ctx.now)) return undefined
    const audit = { at: ctx.now, personId: null, subjectKind: 'patient', subjectId: row.patient.id, siteId: row.patient.siteId, payload: { linkId: row.link.id } }
    if (row.patient.birthDate !== input.birthDate) {
      const locks = row.link.failedTries + 1 >= mostTries
      await tx.update(patientLinks).set(locks ? { failedTries: 0, lockedUntil: new Date(ctx.now.getTime() + lockMs) } : { failedTries: sql`${patientLinks.failedTries} + 1` }).where(eq(patientLinks.id, row.link.id))
      await appendAudit(tx, { ...audit, event: 'messaging.link-refused' })
      return undefined
    }
    await tx.update(patientLinks).set({ failedTries: 0, lockedUntil: null }).where(eq(patientLinks.id, row.link.id))
    await appendAudit(tx, { ...audit, event: 'messaging.link-opened' })
    return row.link.id
  })
  if (!linkId) throw new DomainError('messaging.link-refused', 'We cannot open this page with that date. Look at the date again. A link also ends after some weeks: then ring the number in our text.')
  return { linkId }
}
