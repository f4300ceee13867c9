import { eq } from 'drizzle-orm'
import { biometries } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import { lockCurrentBiometry } from '#server/services/biometry/lock-current'
import type { ServiceContext } from '#server/services/context'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { DomainError } from '#shared/domain/errors'

/** Accepts the newest measurements for planning, once every warning is explained. */
export async function acceptBiometry(ctx: ServiceContext, input: { pathwayId: string, biometryId: string }) {
  const done = await ctx.db.transaction(async (tx) => {
    const loaded = await lockPathway(tx, ctx, { pathwayId: input.pathwayId, act: 'measure', refusal: 'A nurse, optometrist or surgeon of this site accepts biometry.' })
    requireOpen(loaded.pathway)
    const current = await lockCurrentBiometry(tx, input.pathwayId, input.biometryId)
    if (current.acceptedAt) throw new DomainError('biometry.conflict', 'This biometry is accepted already.')
    const open = current.warnings.filter(each => !current.explanations[each.ruleId])
    if (open.length) throw new DomainError('biometry.requirements-unmet', 'Repeat the measurement, or explain each warning first.', { detail: { warnings: open } })
    const [biometry] = await tx.update(biometries).set({ acceptedBy: ctx.actor.personId, acceptedAt: ctx.now }).where(eq(biometries.id, current.id)).returning()
    await recordEvent(tx, ctx, loaded, { kind: 'biometry-accepted', words: 'Biometry accepted', audit: 'biometry.accepted', payload: { version: current.version } })
    return { biometry: biometry ?? current, siteId: loaded.pathway.siteId }
  })
  await notifyLive(ctx.db, 'pathway', done.siteId, [input.pathwayId])
  return done.biometry
}
