import { readFileSync } from 'node:fs'

interface DemoAccounts { password: string, accounts: { name: string, title: string, email: string, phone: string, roles: string[][] }[] }

/** The demo people; scripts/start.mjs prints the same file. */
const accounts = JSON.parse(readFileSync('server/db/seed/accounts.json', 'utf8')) as DemoAccounts
export default accounts
