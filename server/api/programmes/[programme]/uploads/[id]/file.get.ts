import { z } from 'zod'
import { UploadParams } from '#shared/schemas/upload'
import { readUploadFile } from '~~/server/services/readUploadFile'
import { sendFile } from '~~/server/utils/sendFile'

export default defineRoute({
  variant: 'file',
  permission: 'upload.bytes',
  params: UploadParams,
  output: z.custom<Uint8Array>(value => value instanceof Uint8Array),
  async run({ event, params, actor, programmeId, scope }) {
    return sendFile(event, await readUploadFile(useDeps(), { actor, programmeId, scope, id: params.id }))
  },
})
