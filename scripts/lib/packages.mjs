import { createHash } from 'node:crypto'
import { existsSync, readFileSync, writeFileSync } from 'node:fs'
import { run, stopWith } from './shell.mjs'

const mark = 'node_modules/.dawnward-lock'

/** Installs the packages when the lock file says that what is here is not what it names. */
export function ensurePackages() {
  const [major, minor] = process.versions.node.split('.').map(Number)
  if (major < 20 || (major === 20 && minor < 19)) stopWith(`Dawnward needs Node.js 20.19 or newer; this is ${process.versions.node}.`)
  const hash = createHash('sha256').update(readFileSync('package-lock.json')).digest('hex')
  if (existsSync(mark) && readFileSync(mark, 'utf8') === hash) return
  console.log('Installing packages …')
  if (!run('npm', ['ci', '--no-audit', '--no-fund'])) stopWith('The packages could not be installed. Look at the lines above; the network and the disk are the usual reasons.')
  writeFileSync(mark, hash)
}
