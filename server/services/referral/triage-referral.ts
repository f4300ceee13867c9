import { eq, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { referrals } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { changeLocked } from '#server/services/pathway/change-pathway'
import { loadPathway, lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { lockReferral } from '#server/services/referral/lock-referral'
import { queueQuestion } from '#server/services/referral/queue-question'
import type { TriageBody } from '#shared/contracts/referral'
import { DomainError } from '#shared/domain/errors'
import { redFlagsAnswered, redFlagsPresent } from '#shared/domain/referral/red-flags'

const decisionWords = { accepted: 'Referral accepted', returned: 'Referral returned', declined: 'Referral declined' } as const
type TriageInput = TriageBody & { pathwayId: string }

/**
 * A surgeon accepts, returns or declines a referral, for one eye or for both at once. Declining closes the pathway in the same
 * transaction, through the one door; returning sends the question to the referrer, or says that nobody can be written to.
 */
export async function triageReferral(ctx: ServiceContext, { fellow, ...input }: TriageInput) {
  const done = await ctx.db.transaction(async (tx) => {
    requireAnswers(input)
    const first = await decideOne(tx, ctx, input)
    const second = fellow ? await decideOne(tx, ctx, { ...input, pathwayId: fellow.pathwayId, rowVersion: fellow.rowVersion }) : undefined
    if (second && (second.loaded.patient.id !== first.loaded.patient.id || second.loaded.pathway.eye === first.loaded.pathway.eye)) {
      throw new DomainError('referral.invalid', 'That is not the other eye of this person.', { fields: [{ field: 'fellow.pathwayId', code: 'other-person', message: 'Choose the other eye of the same person.' }] })
    }
    const eyes = second ? [first, second] : [first]
    const question = input.decision === 'returned' ? await queueQuestion(tx, ctx, { eyes, note: input.note }) : null
    return { referral: first.referral, pathway: first.pathway, fellow: second?.pathway ?? null, question }
  })
  await notifyLive(ctx.db, 'pathway', done.pathway.siteId, [done.pathway.id, ...done.fellow ? [done.fellow.id] : []])
  return done
}

async function decideOne(tx: Transaction, ctx: ServiceContext, input: Omit<TriageInput, 'fellow'>) {
  const loaded = await lockPathway(tx, ctx, { pathwayId: input.pathwayId, act: 'triage', refusal: 'A surgeon of this site decides about a referral.' })
  requireOpen(loaded.pathway)
  if (loaded.pathway.stage !== 'referral') throw new DomainError('pathway.transition-not-allowed', 'This eye is past its referral.')
  const before = await lockReferral(tx, input.pathwayId, input.rowVersion)
  const [referral] = await tx.update(referrals).set({ triageDecision: input.decision, triageNote: input.note || null, triagedBy: ctx.actor.personId, triagedAt: ctx.now, redFlags: { ...before.redFlags, ...input.redFlags }, rowVersion: sql`${referrals.rowVersion} + 1` })
    .where(eq(referrals.id, before.id)).returning()
  const changed = await recordEvent(tx, ctx, loaded, {
    kind: 'triaged', words: `${decisionWords[input.decision]}${input.note ? `: ${input.note}` : ''}`, audit: 'referral.triaged', payload: { decision: input.decision },
    change: { surgeonId: loaded.pathway.surgeonId ?? ctx.actor.personId, ...(input.priority ? { priority: input.priority } : {}) },
  })
  const pathway = input.decision === 'declined' ? await changeLocked(tx, ctx, await loadPathway(tx, ctx.actor, changed.id), { kind: 'close', reason: 'declined', words: input.note }) : changed
  return { loaded, referral: referral ?? before, pathway }
}
export type Decided = Awaited<ReturnType<typeof decideOne>>

/** Accepting needs every red flag answered; a flag that is there, a return and a refusal need words. */
function requireAnswers({ decision, note, redFlags }: Omit<TriageBody, 'fellow'>): void {
  if (decision === 'accepted' && !redFlagsAnswered(redFlags)) throw new DomainError('referral.incomplete', 'Answer every red flag first.', { fields: [{ field: 'redFlags', code: 'required', message: 'Answer every red flag.' }] })
  const why = decision === 'declined' ? 'Say why it is declined.' : decision === 'returned' ? 'Say what the referrer should add.' : redFlagsPresent(redFlags).length ? 'A red flag is there: say what is done about it.' : undefined
  if (why && note.length < 3) throw new DomainError('referral.incomplete', why, { fields: [{ field: 'note', code: 'required', message: why }] })
}
