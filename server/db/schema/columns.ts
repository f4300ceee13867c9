import { sql } from 'drizzle-orm'
import { integer, timestamp, uuid } from 'drizzle-orm/pg-core'
import type { SQL } from 'drizzle-orm'

/** Every instant is a `timestamptz`; local time exists only at the edge, in the site's zone. */
export const instant = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' })
export const id = () => uuid('id').primaryKey().defaultRandom()
export const rowVersion = () => integer('row_version').notNull().default(1)

/** `column in ('a', 'b')` for a check constraint, from the one list that owns the words. */
export function oneOf(column: unknown, words: readonly (string | number)[]): SQL {
  const list = words.map(word => typeof word === 'number' ? String(word) : `'${word.replaceAll('\'', '\'\'')}'`).join(', ')
  return sql`${column} in (${sql.raw(list)})`
}
