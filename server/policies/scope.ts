import type { Actor, RoleName } from '#shared/domain/people/vocabulary'

const clinical: readonly RoleName[] = ['coordinator', 'nurse', 'optometrist', 'surgeon', 'clinical-lead']

/** Sites where this person holds one of the roles. */
export function sitesWithRole(actor: Actor, ...wanted: RoleName[]): string[] {
  return [...new Set(actor.roles.filter(each => each.siteId && wanted.includes(each.role)).map(each => each.siteId as string))]
}

export function hasRole(actor: Actor, ...wanted: RoleName[]): boolean {
  return actor.roles.some(each => wanted.includes(each.role))
}

export function hasRoleAt(actor: Actor, siteId: string, ...wanted: RoleName[]): boolean {
  return actor.roles.some(each => each.siteId === siteId && wanted.includes(each.role))
}

/** What a person may read of pathways: whole sites, and pathways shared with their practices. */
export function pathwayScope(actor: Actor): { siteIds: string[], practiceIds: string[] } {
  return {
    siteIds: sitesWithRole(actor, ...clinical),
    practiceIds: [...new Set(actor.roles.filter(each => each.practiceId && each.role === 'optometrist').map(each => each.practiceId as string))],
  }
}

export function maySeePathway(actor: Actor, pathway: { siteId: string, practiceId: string | null }): boolean {
  const scope = pathwayScope(actor)
  return scope.siteIds.includes(pathway.siteId) || (pathway.practiceId !== null && scope.practiceIds.includes(pathway.practiceId))
}
