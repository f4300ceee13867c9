import { z } from 'zod'
import { roleNames } from '#shared/domain/people/vocabulary'

export const signInBody = z.strictObject({
  email: z.string().trim().min(3, 'Enter your e-mail address.').max(200),
  password: z.string().min(1, 'Enter your password.').max(200),
})
export type SignInBody = z.infer<typeof signInBody>

export const signOutBody = z.strictObject({ everywhere: z.boolean().default(false) })

export const meResponse = z.object({
  personId: z.string(),
  name: z.string(),
  title: z.string(),
  roleLabel: z.string(),
  siteName: z.string(),
  zone: z.string(),
  sitePhone: z.string(),
  singleKeysOff: z.boolean(),
  roles: z.array(z.object({ role: z.enum(roleNames), siteId: z.string().nullable(), siteName: z.string() })),
  sites: z.array(z.object({ id: z.string(), name: z.string(), code: z.string() })),
  links: z.array(z.object({ label: z.string(), to: z.string(), key: z.string() })),
  openEscalations: z.number(),
  demo: z.boolean(),
})
export type MeResponse = z.infer<typeof meResponse>
