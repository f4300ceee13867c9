import { createHash } from 'node:crypto'
import type { H3Event } from 'h3'
import { getRequestIP } from 'h3'
import { RateLimiterMemory, RateLimiterPostgres } from 'rate-limiter-flexible'
import { usePool } from '#server/db/client'
import { DomainError } from '#shared/domain/errors'

type Limiter = RateLimiterPostgres
const limiters = new Map<string, Promise<Limiter>>()

/** Counts are in PostgreSQL so that several app processes share one limit; the memory one stands in while it is away. */
function limiter(name: string, points: number, seconds: number): Promise<Limiter> {
  const found = limiters.get(name)
  if (found) return found
  const insurance = new RateLimiterMemory({ points, duration: seconds })
  const made = Promise.resolve(new RateLimiterPostgres({ storeClient: usePool(), tableName: 'rate_limits', tableCreated: true, keyPrefix: name, points, duration: seconds, insuranceLimiter: insurance }))
  limiters.set(name, made)
  return made
}

/** Spends one try of `points` in `seconds`, counted by address and by `key` (hashed: the store holds no e-mail address). */
export async function spendTry(event: H3Event, name: string, key: string, points: number, seconds: number): Promise<void> {
  const scale = Number(process.env.DAWNWARD_RATE_SCALE ?? 1)
  const address = getRequestIP(event) ?? 'unknown'
  const hashed = createHash('sha256').update(`${address}|${key}`).digest('base64url')
  const counted = await limiter(name, points * scale, seconds)
  try {
    await counted.consume(hashed)
  }
  catch (refused) {
    if (refused instanceof Error) throw refused
    throw new DomainError('request.too-many-tries', 'Too many tries. Wait a few minutes and try again.')
  }
}
