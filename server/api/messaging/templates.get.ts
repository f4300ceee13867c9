import { presentTemplates } from '#server/presenters/messaging-templates'
import { defineStaffApi } from '#server/utils/api'
import { templatesQuery } from '#shared/contracts/messaging'

// The built-in texts name nobody: whoever is signed in may read them.
export default defineStaffApi({ query: templatesQuery }, async ({ query }) => presentTemplates(query.language))
