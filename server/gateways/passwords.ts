import { Hash } from '@adonisjs/hash'
import { Scrypt } from '@adonisjs/hash/drivers/scrypt'

const hash = new Hash(new Scrypt({}))

/** scrypt, the same format that nuxt-auth-utils writes. */
export function hashPassword(password: string): Promise<string> {
  return hash.make(password)
}

let decoy: Promise<string> | undefined

/** Takes the same time whether or not there is an account: without one a decoy is verified. */
export async function verifyPassword(stored: string | null, password: string): Promise<boolean> {
  decoy ??= hash.make('nobody has this password')
  const matches = await hash.verify(stored ?? await decoy, password)
  return stored !== null && matches
}
