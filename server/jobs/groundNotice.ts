import { z } from 'zod'
import { noticeGround } from '../services/noticeGround'
import { defineJob } from './define'

/** After a signature, its withdrawal or a correction: are the standing decisions still on the ground they were taken on? */
export const groundNotice = defineJob({
  kind: 'ground.notice',
  payload: z.object({ programmeId: z.uuid(), complexId: z.uuid().nullable(), cause: z.string() }),
  limitSeconds: 120,
  async run(deps, { payload }) {
    await noticeGround(deps, { programmeId: payload.programmeId, cause: payload.cause })
  },
})
