import { spawn, spawnSync } from 'node:child_process'

/** Ends with one clear sentence. */
export function stopWith(sentence) {
  console.error(`\n${sentence}`)
  process.exit(1)
}

export function run(command, args, options = {}) {
  const done = spawnSync(command, args, { stdio: 'inherit', ...options })
  return done.status === 0
}

export function capture(command, args, options = {}) {
  const done = spawnSync(command, args, { encoding: 'utf8', ...options })
  return { ok: done.status === 0, out: (done.stdout ?? '') + (done.stderr ?? '') }
}

export function start(command, args, options = {}) {
  return spawn(command, args, { stdio: 'inherit', ...options })
}

export const isRoot = process.getuid?.() === 0
