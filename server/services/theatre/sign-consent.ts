import { desc, eq } from 'drizzle-orm'
import { refusedConstraint } from '#server/db/refused-constraint'
import { consents } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import type { ConsentBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'

/** Records that a surgeon took consent, and what was discussed. A change is a new version with its reason. */
export async function signConsent(ctx: ServiceContext, input: ConsentBody & { pathwayId: string }) {
  try {
    const done = await ctx.db.transaction(async (tx) => {
      const loaded = await lockPathway(tx, ctx, { pathwayId: input.pathwayId, act: 'signConsent', refusal: 'A surgeon of this site signs consent.' })
      requireOpen(loaded.pathway)
      if (loaded.pathway.operatedAt) throw new DomainError('theatre.conflict', 'This eye is operated already.')
      const [last] = await tx.select().from(consents).where(eq(consents.pathwayId, input.pathwayId)).orderBy(desc(consents.version)).limit(1)
      if ((last?.version ?? 0) !== input.baseVersion) throw new DomainError('theatre.stale', 'Consent was signed meanwhile. Look at it first.', { detail: { current: { version: last?.version ?? 0 } } })
      if (last && input.amendReason.length < 3) throw new DomainError('theatre.incomplete', 'Say why consent changes.', { fields: [{ field: 'amendReason', code: 'required', message: 'Say why consent changes.' }] })
      const [consent] = await tx.insert(consents).values({ pathwayId: input.pathwayId, version: input.baseVersion + 1, discussed: input.discussed, riskFigurePercent: input.riskFigurePercent, signedBy: ctx.actor.personId, signedAt: ctx.now, amendReason: last ? input.amendReason : null }).returning()
      if (!consent) throw new DomainError('theatre.conflict', 'Consent could not be signed.')
      await recordEvent(tx, ctx, loaded, { kind: 'consent-signed', words: last ? `Consent amended: ${input.amendReason}` : 'Consent signed', audit: 'theatre.consent-signed', payload: { version: consent.version } })
      return { consent, siteId: loaded.pathway.siteId }
    })
    await notifyLive(ctx.db, 'pathway', done.siteId, [input.pathwayId])
    return done.consent
  }
  catch (error) {
    if (refusedConstraint(error) === 'consents_version') throw new DomainError('theatre.stale', 'Consent was signed meanwhile. Look at it first.')
    throw error
  }
}
