/**
 * The one error type that the domain and the services throw.
 *
 * `code` is stable and dotted by area (`visit.session-full`); the HTTP status is derived from it
 * in one place (server/utils/problem.ts). `message` is plain words for a person. `fields` names
 * what is wrong where, so that a form can put each sentence beside its field.
 */
export interface FieldProblem {
  /** Path of the field, dotted: `iopMmHg`, `lines.3.birthDate`. */
  field: string
  /** Stable code of the refusal: `out-of-range`, `required`, `unit-mix-up` ... */
  code: string
  /** What is wrong and what to enter, in plain words. */
  message: string
  /** The limit that was passed, with its unit, when there is one. */
  limit?: string
}

export class DomainError extends Error {
  readonly code: string
  readonly fields: FieldProblem[]
  /** Facts for the caller that are safe to show (current version, unmet requirements ...). */
  readonly detail: Record<string, unknown>

  constructor(code: string, message: string, options: { fields?: FieldProblem[], detail?: Record<string, unknown> } = {}) {
    super(message)
    this.name = 'DomainError'
    this.code = code
    this.fields = options.fields ?? []
    this.detail = options.detail ?? {}
  }
}
