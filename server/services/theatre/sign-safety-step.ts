import { desc, eq } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { refusedConstraint } from '#server/db/refused-constraint'
import { lensPlans, safetySteps, safetyStops, theatreCases } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { recordEvent } from '#server/services/pathway/record-event'
import { loadCheck } from '#server/services/theatre/finish-case'
import { lockCase } from '#server/services/theatre/load-case'
import type { SafetyStepBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'
import { questionsOf, safetyStepLabels, safetySteps as stepNames } from '#shared/domain/theatre/safety-check'
import type { SafetyAnswers, SafetyQuestion, SafetyStep } from '#shared/domain/theatre/safety-check'

type Check = Awaited<ReturnType<typeof loadCheck>>
type Locked = Awaited<ReturnType<typeof lockCase>>

/** Signs one step, or, where an answer differs, stops the check instead and says why. The first step takes the case into theatre, the last ends it. */
export async function signSafetyStep(ctx: ServiceContext, input: SafetyStepBody & { caseId: string, step: SafetyStep }) {
  try {
    const done = await ctx.db.transaction(async (tx) => {
      const locked = await lockCase(tx, ctx, input.caseId, 'checkSafety', 'A nurse or surgeon of this site signs the safety check.')
      const check = await loadCheck(tx, input.caseId)
      requireTurn(check, input.step)
      const answers = { ...requireAnswers(input), ...await lensAnswer(tx, locked, check, input.step) }
      const differing = uncovered(check, input.step, answers)
      if (differing.length) await stop(tx, ctx, locked, check, input.step, differing)
      else await sign(tx, ctx, locked, input.step, answers)
      return { signed: !differing.length, siteId: locked.list.siteId, pathwayId: locked.theatreCase.pathwayId }
    })
    await notifyLive(ctx.db, 'pathway', done.siteId, [done.pathwayId])
    return done
  }
  catch (error) {
    if (refusedConstraint(error) === 'safety_steps_once') throw new DomainError('theatre.already-signed', 'This step was signed meanwhile.')
    throw error
  }
}

function requireTurn({ steps, open }: Check, step: SafetyStep): void {
  if (steps.some(each => each.step === step)) throw new DomainError('theatre.already-signed', 'This step is signed already.')
  const before = stepNames[stepNames.indexOf(step) - 1]
  if (before && !steps.some(each => each.step === before)) throw new DomainError('theatre.requirements-unmet', `Sign “${safetyStepLabels[before]}” first.`)
  // A stop that only needs to be put right is lifted by this very signature, if its answer now agrees.
  const holding = open.filter(each => each.scanId !== null || each.reasons.some(reason => needsSurgeon(reason.code)))
  if (holding.length) throw new DomainError('theatre.requirements-unmet', 'The check is stopped. A surgeon explains it first.', { detail: { stops: holding.map(each => ({ id: each.id, step: each.step, reasons: each.reasons })) } })
}

const needsSurgeon = (code: string) => stepNames.flatMap(questionsOf).find(question => question.id === code)?.needsSurgeon ?? true

/** Every question of the step has an answer; none is taken as said. */
function requireAnswers({ step, answers }: SafetyStepBody & { step: SafetyStep }): SafetyAnswers {
  const questions = questionsOf(step).filter(question => question.id !== 'lens')
  const fields = [
    ...questions.filter(question => answers[question.id] === undefined).map(question => ({ field: `answers.${question.id}`, code: 'required', message: `Not answered: ${question.asked}` })),
    ...Object.keys(answers).filter(id => !questions.some(question => question.id === id)).map(id => ({ field: `answers.${id}`, code: 'unknown', message: 'This is no question of this step.' })),
  ]
  if (fields.length) throw new DomainError('theatre.incomplete', 'The step is not complete.', { fields })
  return answers
}

/** Whether the lens agrees is not asked: it was held up and compared, with the plan as it is now. A difference that got this far was explained by a surgeon. */
async function lensAnswer(tx: Transaction, { theatreCase }: Locked, { scans }: Check, step: SafetyStep): Promise<SafetyAnswers> {
  if (!questionsOf(step).some(question => question.id === 'lens')) return {}
  const [last] = scans
  const [plan] = await tx.select().from(lensPlans).where(eq(lensPlans.pathwayId, theatreCase.pathwayId)).orderBy(desc(lensPlans.version)).limit(1)
  const message = !last ? 'Scan the lens, or type what stands on its box.' : last.plannedPowerD !== (plan?.powerD ?? null) || last.plannedModel !== (plan?.model ?? null) ? 'The lens plan changed after this lens was held up. Hold it up again.' : undefined
  if (message) throw new DomainError('theatre.incomplete', message, { fields: [{ field: 'lens', code: 'required', message }] })
  return { lens: last?.reasons.length ? 'differs' : 'agrees' }
}

/** Questions whose answer differs without a surgeon's words on just that. */
function uncovered({ stops }: Check, step: SafetyStep, answers: SafetyAnswers): SafetyQuestion[] {
  const explained = stops.filter(each => each.stop.step === step && each.explanation).flatMap(each => each.stop.reasons.map(reason => reason.code))
  return questionsOf(step).filter(question => question.id !== 'lens' && answers[question.id] === 'differs' && !explained.includes(question.id))
}

async function stop(tx: Transaction, ctx: ServiceContext, { theatreCase, loaded }: Locked, check: Check, step: SafetyStep, differing: SafetyQuestion[]): Promise<void> {
  const known = check.open.filter(each => each.step === step).flatMap(each => each.reasons.map(reason => reason.code))
  const fresh = differing.filter(question => !known.includes(question.id))
  if (!fresh.length) return
  await tx.insert(safetyStops).values({ caseId: theatreCase.id, step, reasons: fresh.map(question => ({ code: question.id, sentence: question.stops })), raisedBy: ctx.actor.personId, raisedAt: ctx.now })
  await recordEvent(tx, ctx, loaded, { kind: 'safety-stopped', words: `Safety check stopped: ${fresh.map(question => question.stops).join(' ')}`, audit: 'theatre.safety-stopped', payload: { caseId: theatreCase.id, step, codes: fresh.map(question => question.id) } })
}

async function sign(tx: Transaction, ctx: ServiceContext, { theatreCase, loaded }: Locked, step: SafetyStep, answers: SafetyAnswers): Promise<void> {
  await tx.insert(safetySteps).values({ caseId: theatreCase.id, step, answers, signedBy: ctx.actor.personId, signedAt: ctx.now })
  if (step === 'before-anaesthesia') await tx.update(theatreCases).set({ state: 'in-theatre', startedAt: ctx.now }).where(eq(theatreCases.id, theatreCase.id))
  // The case is done when its note is signed; for the day it ends here.
  if (step === 'before-leaving') await tx.update(theatreCases).set({ endedAt: ctx.now }).where(eq(theatreCases.id, theatreCase.id))
  await recordEvent(tx, ctx, loaded, { kind: 'safety-step', words: `Safety check signed: ${safetyStepLabels[step].toLowerCase()}`, audit: 'theatre.safety-step', payload: { caseId: theatreCase.id, step } })
}
