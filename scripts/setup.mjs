// Makes sure that the packages are there and Nuxt's types are written, for commands that need nothing else.
import { dirname, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'
import { ensurePackages } from './lib/packages.mjs'
import { run, stopWith } from './lib/shell.mjs'

process.chdir(resolve(dirname(fileURLToPath(import.meta.url)), '..'))
ensurePackages()
if (!run('npx', ['nuxt', 'prepare'], { stdio: ['ignore', 'ignore', 'inherit'] })) stopWith('Nuxt could not write its types. Run: npx nuxt prepare')
