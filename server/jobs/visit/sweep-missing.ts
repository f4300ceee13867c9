import type { SystemContext } from '#server/services/context'
import { findLateVisits } from '#server/services/visit/find-late-visits'
import { markMissing } from '#server/services/visit/mark-missing'

/** Finds visits whose patient is late, and hands each to its partner, which looks again before it acts. Safe to run twice, late, and on two machines. */
export async function sweepMissing(ctx: SystemContext): Promise<number> {
  let changed = 0
  for (const id of await findLateVisits(ctx)) if (await markMissing(ctx, id)) changed++
  return changed
}
