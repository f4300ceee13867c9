import type { Database, Transaction } from '#server/db/client'
import accounts from '#server/db/seed/accounts'
import { seedId } from '#server/db/seed/seed-id'
import type { ServiceContext } from '#server/services/context'
import type { RoleName } from '#shared/domain/people/vocabulary'
import type { ReviewFindings } from '#shared/domain/review/vocabulary'

export type DemoPerson = 'maren.oxlade' | 'ivo.hartnell' | 'tobias.quillfeather' | 'ada.renshawe' | 'petra.lanyon' | 'edmund.farrowby'

/** One of the demo people at work at one instant: the seed's signed records pass through the same services as everybody's. */
export function asPerson(tx: Transaction, who: DemoPerson, now: Date): ServiceContext {
  const email = `${who}@example.org`
  const account = accounts.accounts.find(each => each.email === email)
  if (!account) throw new Error(`There is no demo account ${who}.`)
  const roles = account.roles.map(([role, place = '']) => ({ role: role as RoleName, siteId: place.startsWith('practice:') ? null : seedId(`site:${place}`), practiceId: place.startsWith('practice:') ? seedId(place) : null }))
  // A transaction offers all that a service asks of the database; its own transaction becomes a savepoint of this one.
  return { db: tx as unknown as Database, now, actor: { personId: seedId(`person:${email}`), name: account.name, roles } }
}

/** A quiet eye, everything recorded, so that the rules have nothing unknown to pass over. */
export const quietEye: ReviewFindings = {
  painScore: 1, painGrowing: false, vomiting: false, acuityUnaided: { logMar: 0.2, entered: '6/9.5' }, iopMmHg: 15, iopMethod: 'applanation', oedemaGrade: 0, folds: 'none', infiltrate: false, epithelialDefectMm: 0, wound: 'sealed', seidel: 'negative', irisInWound: false,
  chamberDepth: 'deep', cells: '1+', flare: '1+', fibrin: false, hypopyonMm: 0, hyphaema: 'none', vitreousInChamber: false, vitreousCells: false, pupil: 'round', lensPosition: 'centred', lensFragment: 'none', redReflex: 'normal', lidSwelling: false, flashesOrFloaters: false, curtainOrFieldLoss: false, dropsUse: 'using',
}
