import { z } from 'zod'
import { expireUploads, removeUnneeded } from '../services/expireUploads'
import { defineJob } from './define'

/** With a key: removes the bytes of one discarded upload. Without: ends overdue uploads and removes every orphan. */
export const sweepUploads = defineJob({
  kind: 'uploads.sweep',
  payload: z.object({ storageKey: z.string().optional() }),
  limitSeconds: 300,
  async run(deps, { payload }) {
    if (payload.storageKey) await removeUnneeded(deps, [payload.storageKey])
    else await expireUploads(deps)
  },
})
