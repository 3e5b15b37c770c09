import { z } from 'zod'
import { UploadParams } from '#shared/schemas/upload'
import { discardUpload } from '~~/server/services/discardUpload'

export default defineRoute({
  variant: 'json',
  permission: 'upload.stage',
  params: UploadParams,
  output: z.object({ done: z.literal(true) }),
  run: ({ params, actor, programmeId, idempotency }) => discardUpload(useDeps(), { actor, programmeId, id: params.id, idempotency }),
})
