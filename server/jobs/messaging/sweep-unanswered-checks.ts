import type { SystemContext } from '#server/services/context'
import { findUnansweredChecks, flagUnansweredCheck } from '#server/services/messaging/flag-unanswered-check'

/** May run twice, late and on two machines: each check reaches the nurse's list once. */
export async function sweepUnansweredChecks(ctx: SystemContext): Promise<number> {
  let flagged = 0
  for (const id of await findUnansweredChecks(ctx)) if (await flagUnansweredCheck(ctx, id)) flagged++
  return flagged
}
