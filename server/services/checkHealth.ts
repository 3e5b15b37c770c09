import type { Deps } from '../platform/deps'

/** Whether the process can reach its database; throws where it cannot. */
export async function checkHealth({ db }: Deps): Promise<{ ok: true }> {
  await db.raw('SELECT 1')
  return { ok: true }
}
