import { randomUUID } from 'node:crypto'
import { mkdir, readFile, rename, rm, writeFile } from 'node:fs/promises'
import { resolve } from 'node:path'

/** Where the bytes of attachments are. A service knows only this; object storage of a cloud would be another one of it. */
export interface FileStore {
  /** Keeps the bytes and answers the name under which they are found. */
  put(bytes: Uint8Array): Promise<string>
  get(storedAs: string): Promise<Buffer>
  remove(storedAs: string): Promise<void>
}

const named = /^[0-9a-f]{2}\/[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/

/** Files in a folder of this machine: random names, nothing of what the sender called them, never under a folder that is served. */
export function diskStore(folder: string): FileStore {
  const place = (storedAs: string) => {
    if (!named.test(storedAs)) throw new Error('not a stored name')
    return resolve(folder, storedAs)
  }
  return {
    async put(bytes) {
      const id = randomUUID()
      const storedAs = `${id.slice(0, 2)}/${id}`
      await mkdir(resolve(folder, id.slice(0, 2)), { recursive: true, mode: 0o700 })
      // Written beside and renamed, so that a crash leaves no half file under a name that is looked for.
      await writeFile(`${place(storedAs)}.part`, bytes, { mode: 0o600, flag: 'wx' })
      await rename(`${place(storedAs)}.part`, place(storedAs))
      return storedAs
    },
    get: storedAs => readFile(place(storedAs)),
    remove: storedAs => rm(place(storedAs), { force: true }),
  }
}

let store: FileStore | undefined
export function useFiles(): FileStore {
  store ??= diskStore(resolve(process.env.DAWNWARD_FILES ?? '.data/files'))
  return store
}
