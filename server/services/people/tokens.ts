import { createHash, randomBytes } from 'node:crypto'

/** 32 random bytes, URL-safe: the secret that leaves; only its hash stays. */
export function newSecret(): string {
  return randomBytes(32).toString('base64url')
}

export function hashSecret(secret: string): string {
  return createHash('sha256').update(secret).digest('hex')
}
