export const roleNames = ['coordinator', 'nurse', 'optometrist', 'surgeon', 'clinical-lead', 'administrator'] as const
export type RoleName = typeof roleNames[number]

export const roleLabels: Record<RoleName, string> = {
  'coordinator': 'Coordinator',
  'nurse': 'Clinic nurse',
  'optometrist': 'Optometrist',
  'surgeon': 'Surgeon',
  'clinical-lead': 'Clinical lead',
  'administrator': 'Administrator',
}

/** Who is asking. Loaded once per request from the session row; never from the cookie's content. */
export interface Actor {
  personId: string
  name: string
  roles: { role: RoleName, siteId: string | null, practiceId: string | null }[]
}
