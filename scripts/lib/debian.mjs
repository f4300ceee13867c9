import { existsSync, mkdirSync, readdirSync, writeFileSync } from 'node:fs'
import { capture, isRoot, run, stopWith } from './shell.mjs'

/** Installs one of Debian's packages as root, else through sudo, else says what to run. */
export function installDebian(name) {
  const admin = isRoot ? [] : ['sudo', '-n']
  const may = isRoot || capture('sudo', ['-n', 'true']).ok
  if (!existsSync('/usr/bin/apt-get') || !may) stopWith(`Dawnward needs Debian's ${name}. Run: sudo apt-get update && sudo apt-get install -y ${name}`)
  console.log(`Installing Debian's ${name} …`)
  const apt = (...args) => run(admin[0] ?? 'apt-get', [...admin.slice(1), ...(admin.length ? ['apt-get'] : []), ...args], { env: { ...process.env, DEBIAN_FRONTEND: 'noninteractive' }, stdio: ['ignore', 'ignore', 'inherit'] })
  if (!apt('update') || !apt('install', '-y', '--no-install-recommends', name)) stopWith(`Debian's ${name} could not be installed. Run: sudo apt-get update && sudo apt-get install -y ${name}`)
}

/** The folder of PostgreSQL's programs, installing Debian's package when there is none. */
export function postgresPrograms() {
  const find = () => {
    const base = '/usr/lib/postgresql'
    const versions = existsSync(base) ? readdirSync(base).filter(each => existsSync(`${base}/${each}/bin/initdb`)).sort((a, b) => Number(b) - Number(a)) : []
    return versions.length ? `${base}/${versions[0]}/bin` : undefined
  }
  const found = find()
  if (found) return found
  // Debian would start a cluster of its own at once; ours is private, so it is told not to.
  if (isRoot && !existsSync('/etc/postgresql-common/createcluster.conf')) {
    mkdirSync('/etc/postgresql-common', { recursive: true })
    writeFileSync('/etc/postgresql-common/createcluster.conf', 'create_main_cluster = false\n')
  }
  installDebian('postgresql')
  return find() ?? stopWith('PostgreSQL was installed, but its programs were not found under /usr/lib/postgresql.')
}

/** Chromium for the browser tests. */
export function ensureChromium() {
  if (!existsSync('/usr/bin/chromium')) installDebian('chromium')
  return '/usr/bin/chromium'
}
