import type { getMe } from '#server/services/people/get-me'
import type { MeResponse } from '#shared/contracts/people'
import { roleLabels } from '#shared/domain/people/vocabulary'
import type { RoleName } from '#shared/domain/people/vocabulary'

const everyLink: { label: string, to: string, key: string, roles: readonly RoleName[] }[] = [
  { label: 'Today', to: '/', key: 't', roles: ['coordinator', 'nurse', 'optometrist', 'surgeon', 'clinical-lead', 'administrator'] },
  { label: 'Pathways', to: '/pathways', key: 'p', roles: ['coordinator', 'nurse', 'optometrist', 'surgeon', 'clinical-lead'] },
  { label: 'Referrals', to: '/triage', key: 'r', roles: ['coordinator', 'surgeon', 'clinical-lead'] },
  { label: 'Clinics', to: '/clinic', key: 'c', roles: ['coordinator', 'nurse', 'optometrist', 'surgeon', 'clinical-lead'] },
  { label: 'Theatre', to: '/theatre', key: 'h', roles: ['coordinator', 'nurse', 'surgeon', 'clinical-lead'] },
  { label: 'Escalations', to: '/escalations', key: 'e', roles: ['nurse', 'optometrist', 'surgeon', 'clinical-lead'] },
  { label: 'Messages', to: '/messages', key: 'm', roles: ['coordinator', 'nurse', 'clinical-lead'] },
]

export function presentMe(me: Awaited<ReturnType<typeof getMe>>, demo: boolean): MeResponse {
  const held = me.actor.roles
  const first = held[0]
  const placeOf = (role: { siteId: string | null, practiceId: string | null }) =>
    me.sites.find(site => site.id === role.siteId)?.name ?? me.practices.find(practice => practice.id === role.practiceId)?.name ?? ''
  const site = me.sites.find(each => held.some(role => role.siteId === each.id)) ?? me.sites[0]
  return {
    personId: me.actor.personId,
    name: me.actor.name,
    title: me.title,
    roleLabel: first ? roleLabels[first.role] : 'No role yet',
    siteName: first ? placeOf(first) : '',
    zone: site?.zone ?? 'Europe/London',
    sitePhone: site?.phone ?? '',
    singleKeysOff: me.singleKeysOff,
    roles: held.map(role => ({ role: role.role, siteId: role.siteId, siteName: placeOf(role) })),
    sites: me.sites.filter(each => held.some(role => role.siteId === each.id)).map(each => ({ id: each.id, name: each.name, code: each.code })),
    links: everyLink.filter(link => link.roles.some(role => held.some(each => each.role === role))).map(({ label, to, key }) => ({ label, to, key })),
    openEscalations: me.openEscalations,
    demo,
  }
}
