import { FetchError } from 'ofetch'

export interface ProblemBody { title: string, status: number, code: string, detail: string, fields?: { field: string, code: string, message: string, limit?: string }[], [extra: string]: unknown }

/** A refused request: the server's own words, with the fields they belong to. */
export class ApiProblem extends Error {
  constructor(readonly problem: ProblemBody) {
    super(problem.title)
    this.name = 'ApiProblem'
  }

  get status() { return this.problem.status }
  get code() { return this.problem.code }
  fieldMessage(field: string): string | undefined {
    return this.problem.fields?.find(each => each.field === field)?.message
  }
}

interface ApiOptions { method?: 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE', body?: unknown, query?: Record<string, unknown> }

const unreachable: ProblemBody = { title: 'No connection. What you typed is still here.', status: 0, code: 'request.unreachable', detail: 'Try again when the network is back.' }

/** The only way a page reaches the server: JSON, our CSRF header, the caller's cookie in server rendering. */
export function useApi() {
  // The path is a plain string here: typed against every route of the server, it would cost the compiler more than it tells us.
  const request = useRequestFetch() as (path: string, options: Record<string, unknown>) => Promise<unknown>
  return async function api<T>(path: string, options: ApiOptions = {}): Promise<T> {
    try {
      return await request(path, { method: options.method ?? 'GET', body: options.body, query: options.query, headers: { 'x-dawnward-csrf': '1' }, retry: 0 }) as T
    }
    catch (error) {
      if (error instanceof FetchError && error.data && typeof error.data === 'object') throw new ApiProblem({ ...unreachable, status: error.status ?? 0, ...error.data as object })
      throw new ApiProblem(error instanceof FetchError && error.status ? { ...unreachable, status: error.status, title: 'The server did not answer as it should.', code: 'server.failed' } : unreachable)
    }
  }
}
