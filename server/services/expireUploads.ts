import type { Deps } from '../platform/deps'
import { overdueStaged, settleStaged, unneededKeys } from '../queries/uploads'
import { STAGED_HOURS } from './stageUpload'
import { unitOfWork } from './unitOfWork'

const PAGE = 200

/** Ends staged uploads whose 24 hours are over, then removes bytes that nothing needs any more. @returns how many of each */
export async function expireUploads(deps: Deps): Promise<{ expired: number, removed: number }> {
  let expired = 0
  for (const staged of await overdueStaged(deps.db, deps.clock.now(), PAGE)) {
    const ended = await unitOfWork(deps, { actor: null, name: 'expireUpload', programmeId: staged.programmeId }, async work => ({
      result: await settleStaged(work.trx, staged.id, 'expired'), subject: `upload ${staged.id}`, payload: { fileName: staged.fileName },
    }))
    if (ended) expired++
  }
  const old = (await deps.storage.keys('upload')).filter(key => madeBefore(key, deps.clock.now().getTime() - STAGED_HOURS * 3_600_000))
  let removed = 0
  for (let i = 0; i < old.length; i += PAGE) removed += await removeUnneeded(deps, old.slice(i, i + PAGE))
  return { expired, removed }
}

/** Removes those of the keys that neither an upload nor an open staged upload refers to. */
export async function removeUnneeded(deps: Pick<Deps, 'db' | 'storage'>, keys: readonly string[]): Promise<number> {
  const unneeded = await unneededKeys(deps.db, keys)
  for (const key of unneeded) await deps.storage.remove(key)
  return unneeded.length
}

/** Bytes go first and their row a moment later, so only keys older than any staged upload can be orphans. The id in a key begins with its time. */
function madeBefore(key: string, time_ms: number): boolean {
  const id = /([0-9a-f]{8})-([0-9a-f]{4})-7[0-9a-f]{3}-[0-9a-f]{4}-[0-9a-f]{12}$/.exec(key)
  return id !== null && Number.parseInt(`${id[1]}${id[2]}`, 16) < time_ms
}
