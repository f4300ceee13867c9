import { eq, sql } from 'drizzle-orm'
import { referrals } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { changeLocked } from '#server/services/pathway/change-pathway'
import { loadPathway, lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { lockReferral } from '#server/services/referral/lock-referral'
import type { TriageBody } from '#shared/contracts/referral'
import { DomainError } from '#shared/domain/errors'
import { redFlagsAnswered, redFlagsPresent } from '#shared/domain/referral/red-flags'

const decisionWords = { accepted: 'Referral accepted', returned: 'Referral returned', declined: 'Referral declined' } as const

/** A surgeon accepts, returns or declines a referral. Declining closes the pathway in the same transaction, through the one door. */
export async function triageReferral(ctx: ServiceContext, input: TriageBody & { pathwayId: string }) {
  const done = await ctx.db.transaction(async (tx) => {
    const loaded = await lockPathway(tx, ctx, { pathwayId: input.pathwayId, act: 'triage', refusal: 'A surgeon of this site decides about a referral.' })
    requireOpen(loaded.pathway)
    if (loaded.pathway.stage !== 'referral') throw new DomainError('pathway.transition-not-allowed', 'This eye is past its referral.')
    const before = await lockReferral(tx, input.pathwayId, input.rowVersion)
    requireAnswers(input)
    const [referral] = await tx.update(referrals).set({ triageDecision: input.decision, triageNote: input.note || null, triagedBy: ctx.actor.personId, triagedAt: ctx.now, redFlags: { ...before.redFlags, ...input.redFlags }, rowVersion: sql`${referrals.rowVersion} + 1` })
      .where(eq(referrals.id, before.id)).returning()
    const pathway = await recordEvent(tx, ctx, loaded, {
      kind: 'triaged', words: `${decisionWords[input.decision]}${input.note ? `: ${input.note}` : ''}`, audit: 'referral.triaged', payload: { decision: input.decision },
      change: { surgeonId: loaded.pathway.surgeonId ?? ctx.actor.personId, ...(input.priority ? { priority: input.priority } : {}) },
    })
    const closed = input.decision === 'declined' ? await changeLocked(tx, ctx, await loadPathway(tx, ctx.actor, pathway.id), { kind: 'close', reason: 'declined', words: input.note }) : pathway
    return { referral, pathway: closed }
  })
  await notifyLive(ctx.db, 'pathway', done.pathway.siteId, [done.pathway.id])
  return done
}

/** Accepting needs every red flag answered; a flag that is there, a return and a refusal need words. */
function requireAnswers({ decision, note, redFlags }: TriageBody): void {
  if (decision === 'accepted' && !redFlagsAnswered(redFlags)) throw new DomainError('referral.incomplete', 'Answer every red flag first.', { fields: [{ field: 'redFlags', code: 'required', message: 'Answer every red flag.' }] })
  const why = decision === 'declined' ? 'Say why it is declined.' : decision === 'returned' ? 'Say what the referrer should add.' : redFlagsPresent(redFlags).length ? 'A red flag is there: say what is done about it.' : undefined
  if (why && note.length < 3) throw new DomainError('referral.incomplete', why, { fields: [{ field: 'note', code: 'required', message: why }] })
}
