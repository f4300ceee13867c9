/** The name of the constraint that refused, when an error came from PostgreSQL's unique, exclusion or check rules. */
export function refusedConstraint(error: unknown): string | undefined {
  const cause = (error as { cause?: unknown })?.cause ?? error
  const code = (cause as { code?: unknown })?.code
  if (code !== '23505' && code !== '23P01' && code !== '23514') return undefined
  const constraint = (cause as { constraint?: unknown })?.constraint
  return typeof constraint === 'string' ? constraint : undefined
}
