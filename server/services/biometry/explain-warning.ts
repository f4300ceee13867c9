import { eq } from 'drizzle-orm'
import { biometries } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import { lockCurrentBiometry } from '#server/services/biometry/lock-current'
import type { ServiceContext } from '#server/services/context'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { DomainError } from '#shared/domain/errors'

/** Explains one warning by name: what was looked at, and who says so. Repeating the measurement is the other way out. */
export async function explainWarning(ctx: ServiceContext, input: { pathwayId: string, biometryId: string, ruleId: string, words: string }) {
  const done = await ctx.db.transaction(async (tx) => {
    const loaded = await lockPathway(tx, ctx, { pathwayId: input.pathwayId, act: 'measure', refusal: 'A nurse, optometrist or surgeon of this site explains a warning.' })
    requireOpen(loaded.pathway)
    const current = await lockCurrentBiometry(tx, input.pathwayId, input.biometryId)
    if (current.acceptedAt) throw new DomainError('biometry.conflict', 'This biometry is accepted already.')
    if (!current.warnings.some(each => each.ruleId === input.ruleId)) throw new DomainError('biometry.not-found', 'There is no such warning.')
    const [biometry] = await tx.update(biometries).set({ explanations: { ...current.explanations, [input.ruleId]: { words: input.words, personId: ctx.actor.personId, at: ctx.now.toISOString() } } }).where(eq(biometries.id, current.id)).returning()
    await recordEvent(tx, ctx, loaded, { kind: 'biometry-explained', words: `Biometry warning explained: ${input.words}`, audit: 'biometry.explained', payload: { ruleId: input.ruleId, version: current.version } })
    return { biometry: biometry ?? current, siteId: loaded.pathway.siteId }
  })
  await notifyLive(ctx.db, 'pathway', done.siteId, [input.pathwayId])
  return done.biometry
}
