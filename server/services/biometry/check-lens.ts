import { and, desc, eq } from 'drizzle-orm'
import type { Queryable } from '#server/db/client'
import { biometries } from '#server/db/schema/index'
import { biometryOf, measuresOf } from '#server/services/biometry/measures'
import type { ServiceContext } from '#server/services/context'
import { loadPathway } from '#server/services/pathway/load-pathway'
import type { LoadedPathway } from '#server/services/pathway/load-pathway'
import type { CheckLensBody } from '#shared/contracts/biometry'
import { secondCheck } from '#shared/domain/biometry/lens-power/second-check'
import type { SecondCheck } from '#shared/domain/biometry/lens-power/second-check'
import { DomainError } from '#shared/domain/errors'

/** Starting value, 'proposed': a site's clinical lead may tighten it in the site's settings. */
const defaultLimitD = 0.5
/** An eye or cornea that the formulas were not made for: the check is then not available, which has to be explained like a difference. */
const notAvailable = ['biometry.cornea-operated', 'biometry.eye-out-of-formula-range', 'biometry.no-formula-usable']

export interface LensCheck {
  verdict: 'agrees' | 'differs' | 'not-available'
  check: SecondCheck | null
  limitD: number
  /** Why it must be explained, in plain words; empty when it agrees. */
  reasons: string[]
}

function limitOf({ settings }: LoadedPathway['site']): number {
  const given = settings.secondCheckLimitD
  return typeof given === 'number' && given >= 0.1 && given < defaultLimitD ? given : defaultLimitD
}

/** The second check of a lens that a surgeon has chosen. It never chooses one. Throws for a slip in what was entered. */
export function judgeLens(loaded: LoadedPathway, biometry: typeof biometries.$inferSelect, input: CheckLensBody): LensCheck {
  const limitD = limitOf(loaded.site)
  const fromTargetD = Math.abs(input.predictedD - input.targetD)
  const reasons = fromTargetD > limitD + 1e-9 ? [`The printout’s prediction differs from the target by ${fromTargetD.toFixed(2)} D.`] : []
  try {
    const check = secondCheck({ biometry: biometryOf(loaded.pathway.eye, measuresOf(biometry)), constants: { aConstant: input.aConstant }, powerD: input.powerD, targetD: input.targetD, limitD, cornealRefractiveSurgery: input.cornealRefractiveSurgery })
    if (check.agreement === 'differs') reasons.push(`The second check differs from the target by more than ${limitD.toFixed(2)} D.`)
    return { verdict: reasons.length ? 'differs' : 'agrees', check, limitD, reasons }
  }
  catch (error) {
    if (!(error instanceof DomainError) || !notAvailable.includes(error.code)) throw error
    return { verdict: 'not-available', check: null, limitD, reasons: [...reasons, error.message] }
  }
}

export async function currentBiometry(db: Queryable, pathwayId: string, biometryId: string) {
  const [row] = await db.select().from(biometries).where(and(eq(biometries.pathwayId, pathwayId))).orderBy(desc(biometries.version)).limit(1)
  if (!row) throw new DomainError('biometry.not-found', 'This eye is not measured yet.')
  if (row.id !== biometryId) throw new DomainError('biometry.stale', 'This eye was measured again meanwhile. Look at the newest version.', { detail: { current: { id: row.id, version: row.version } } })
  return row
}

/** The second check while a plan is being written. Stores nothing. */
export async function checkLens(ctx: ServiceContext, input: CheckLensBody & { pathwayId: string }): Promise<LensCheck> {
  const loaded = await loadPathway(ctx.db, ctx.actor, input.pathwayId)
  return judgeLens(loaded, await currentBiometry(ctx.db, input.pathwayId, input.biometryId), input)
}
