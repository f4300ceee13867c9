import { desc, eq } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { biometries } from '#server/db/schema/index'
import { DomainError } from '#shared/domain/errors'

/** The newest measurements of a pathway, locked, if they are the ones that the caller saw. */
export async function lockCurrentBiometry(tx: Transaction, pathwayId: string, biometryId: string) {
  const [current] = await tx.select().from(biometries).where(eq(biometries.pathwayId, pathwayId)).orderBy(desc(biometries.version)).limit(1).for('update')
  if (!current) throw new DomainError('biometry.not-found', 'This eye is not measured yet.')
  if (current.id !== biometryId) throw new DomainError('biometry.stale', 'This eye was measured again meanwhile. Look at the newest version.', { detail: { current: { id: current.id, version: current.version } } })
  return current
}
