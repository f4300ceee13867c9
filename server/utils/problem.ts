import type { H3Event } from 'h3'
import { setResponseHeader, setResponseStatus } from 'h3'
import { ZodError } from 'zod'
import { DomainError } from '#shared/domain/errors'
import type { FieldProblem } from '#shared/domain/errors'

/** The last part of a code decides its status; a whole code here wins. One map for the whole product. */
const statusOfEnding: Record<string, number> = {
  'not-signed-in': 401,
  'not-allowed': 403,
  'not-found': 404,
  'invalid': 422,
  'out-of-range': 422,
  'stale': 409,
  'conflict': 409,
  'session-full': 409,
  'place-taken': 409,
  'place-closed': 409,
  'place-past': 422,
  'not-suitable': 422,
  'room-taken': 409,
  'still-booked': 409,
  'incomplete': 422,
  'doubtful': 422,
  'site-not-found': 404,
  'place-not-found': 404,
  'session-not-found': 404,
  'already-signed': 409,
  'already-closed': 409,
  'already-acknowledged': 409,
  'already-open': 409,
  'duplicate': 409,
  'requirements-unmet': 409,
  'transition-not-allowed': 409,
  'closed': 409,
  'held': 409,
  'locked': 429,
  'too-many-tries': 429,
  'too-large': 413,
  'wrong-type': 415,
  'expired': 410,
  'server.not-ready': 503,
  'people.sign-in-refused': 401,
}

export function statusOf(code: string): number {
  const ending = code.slice(code.indexOf('.') + 1)
  return statusOfEnding[code] ?? statusOfEnding[ending] ?? 422
}

export interface Problem {
  type: string
  title: string
  status: number
  code: string
  detail: string
  fields?: FieldProblem[]
  [extra: string]: unknown
}

export function problemOf(error: unknown): Problem {
  if (error instanceof DomainError) {
    const status = statusOf(error.code)
    return { type: `urn:dawnward:${error.code}`, title: error.message, status, code: error.code, detail: error.message, ...(error.fields.length ? { fields: error.fields } : {}), ...error.detail }
  }
  if (error instanceof ZodError) {
    const fields = error.issues.map(issue => ({ field: issue.path.join('.') || '(whole request)', code: issue.code, message: issue.message }))
    return { type: 'urn:dawnward:request.invalid', title: 'Some of what was sent cannot be used.', status: 422, code: 'request.invalid', detail: fields.map(each => `${each.field}: ${each.message}`).join('; '), fields }
  }
  const refused = databaseRefusal(error)
  if (refused) return refused
  return { type: 'urn:dawnward:server.failed', title: 'Something went wrong on our side. Nothing was changed.', status: 500, code: 'server.failed', detail: 'Try again; if it goes on, ring the unit.' }
}

/** A constraint that refused is the client's conflict, not our failure; each service names the ones it expects. */
function databaseRefusal(error: unknown): Problem | undefined {
  const cause = (error as { cause?: unknown })?.cause ?? error
  const code = (cause as { code?: unknown })?.code
  const constraint = String((cause as { constraint?: unknown })?.constraint ?? '')
  const refusals: Record<string, [number, string, string]> = {
    '23505': [409, 'record.conflict', 'This is already recorded.'],
    '23P01': [409, 'record.conflict', 'This overlaps with something already recorded.'],
    '23514': [422, 'record.invalid', 'A value is outside what the record allows.'],
    '23503': [422, 'record.invalid', 'Something that this refers to does not exist.'],
    '22P02': [422, 'request.invalid', 'A value has the wrong form.'],
    '22021': [422, 'request.invalid', 'The text holds a character that cannot be stored.'],
    '22P05': [422, 'request.invalid', 'The text holds a character that cannot be stored.'],
    '22003': [422, 'request.invalid', 'A number is too large.'],
    '22008': [422, 'request.invalid', 'A date is outside the calendar.'],
  }
  const found = typeof code === 'string' ? refusals[code] : undefined
  if (!found) return undefined
  return { type: `urn:dawnward:${found[1]}`, title: found[2], status: found[0], code: found[1], detail: constraint ? `${found[2]} (${constraint})` : found[2] }
}

/** Answers with RFC 9457 problem JSON. */
export function sendProblem(event: H3Event, problem: Problem): Problem {
  setResponseStatus(event, problem.status)
  setResponseHeader(event, 'content-type', 'application/problem+json')
  setResponseHeader(event, 'cache-control', 'no-store')
  return problem
}
