import { createHash } from 'node:crypto'
import { existsSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { run, stopWith } from './shell.mjs'

const sources = ['app', 'server', 'shared', 'public', 'nuxt.config.ts', 'tailwind.config.ts', 'package-lock.json']
const mark = '.output/.dawnward-hash'

export function hashSources(paths = sources) {
  const hash = createHash('sha256')
  const walk = (path) => {
    if (!existsSync(path)) return
    if (statSync(path).isDirectory()) {
      for (const name of readdirSync(path).sort()) walk(join(path, name))
      return
    }
    hash.update(path).update('\0').update(readFileSync(path)).update('\0')
  }
  for (const path of paths) walk(path)
  return hash.digest('hex')
}

/** Builds when the sources are not those of the build that is here. */
export function ensureBuild() {
  const hash = hashSources()
  if (existsSync(mark) && readFileSync(mark, 'utf8') === hash) return
  console.log('Building …')
  if (!run('npx', ['nuxt', 'build'], { stdio: ['ignore', process.env.CI ? 'inherit' : 'ignore', 'inherit'], env: { ...process.env, NODE_OPTIONS: '--max-old-space-size=4096' } })) stopWith('The build failed. Run: npx nuxt build')
  writeFileSync(mark, hash)
}
