import type { EventHandler, H3Event } from 'h3'
import { defineEventHandler, getQuery, getRouterParams, readRawBody, setResponseHeader } from 'h3'
import { z } from 'zod'
import { useDatabase } from '#server/db/client'
import type { ServiceContext, SystemContext } from '#server/services/context'
import { now } from '#server/utils/clock'
import { log } from '#server/utils/log'
import { problemOf, sendProblem } from '#server/utils/problem'
import { DomainError } from '#shared/domain/errors'

const maxBodyBytes = 1_000_000
type Schema = z.ZodType | undefined
type Parsed<S extends Schema> = S extends z.ZodType ? z.output<S> : undefined

interface Parts<B extends Schema, P extends Schema, Q extends Schema> { body?: B, params?: P, query?: Q }
interface Given<B extends Schema, P extends Schema, Q extends Schema, C> { ctx: C, body: Parsed<B>, params: Parsed<P>, query: Parsed<Q>, event: H3Event }

async function readJson(event: H3Event): Promise<unknown> {
  const raw = await readRawBody(event, 'utf8')
  if (!raw) return {}
  if (Buffer.byteLength(raw) > maxBodyBytes) throw new DomainError('request.too-large', 'The request is larger than 1 MB.')
  // PostgreSQL stores no NUL; refusing it here names the reason instead of failing at the insert.
  if (raw.includes('\\u0000') || raw.includes('\0')) throw new DomainError('request.invalid', 'The text holds a character that cannot be stored.')
  try {
    return JSON.parse(raw)
  }
  catch {
    throw new DomainError('request.invalid', 'The request is not valid JSON.')
  }
}

async function parse<B extends Schema, P extends Schema, Q extends Schema>(event: H3Event, parts: Parts<B, P, Q>) {
  const params = parts.params ? parts.params.parse(getRouterParams(event, { decode: true })) : undefined
  const query = parts.query ? parts.query.parse(getQuery(event)) : undefined
  const body = parts.body ? parts.body.parse(await readJson(event)) : undefined
  return { params: params as Parsed<P>, query: query as Parsed<Q>, body: body as Parsed<B> }
}

async function answer(event: H3Event, work: () => Promise<unknown>): Promise<unknown> {
  setResponseHeader(event, 'cache-control', 'no-store')
  try {
    return await work() ?? null
  }
  catch (error) {
    const problem = problemOf(error)
    // The code and the place, never the words of the request: a log holds nothing clinical.
    if (problem.status >= 500) log.error({ code: problem.code, path: event.path.split('?')[0], name: (error as Error)?.name, at: (error as Error)?.stack?.split('\n').slice(1, 4), pg: ((error as { cause?: { code?: string } })?.cause)?.code }, 'request failed')
    return sendProblem(event, problem)
  }
}

/** A route for a signed-in person. The caller is identified before anything is parsed. */
export function defineStaffApi<B extends Schema = undefined, P extends Schema = undefined, Q extends Schema = undefined>(
  parts: Parts<B, P, Q>, work: (given: Given<B, P, Q, ServiceContext>) => Promise<unknown>): EventHandler {
  return defineEventHandler(event => answer(event, async () => {
    const actor = event.context.actor
    if (!actor) throw new DomainError('people.not-signed-in', 'Sign in first.')
    return work({ ctx: { db: useDatabase(), now: now(), actor }, event, ...await parse(event, parts) })
  }))
}

/** A route that anybody may call: sign-in, the patient's own link, webhooks, health. Say why beside each use. */
export function definePublicApi<B extends Schema = undefined, P extends Schema = undefined, Q extends Schema = undefined>(
  parts: Parts<B, P, Q>, work: (given: Given<B, P, Q, SystemContext>) => Promise<unknown>): EventHandler {
  return defineEventHandler(event => answer(event, async () =>
    work({ ctx: { db: useDatabase(), now: now() }, event, ...await parse(event, parts) })))
}

/** `{ id }` as a UUID: a guessed or malformed id is simply not found. */
export const idParams = z.object({ id: z.uuid('Not an id.') })
