import { UPLOAD_LIMITS } from '#shared/measurements/tabular/limits'
import { StagedUploadDto } from '#shared/schemas/upload'
import { stageUpload } from '~~/server/services/stageUpload'

export default defineRoute({
  variant: 'upload',
  permission: 'upload.stage',
  output: StagedUploadDto,
  // The form around the file takes a little more.
  maxBytes: UPLOAD_LIMITS.bytes + 16 * 1024,
  run: ({ actor, programmeId, files, idempotency }) => stageUpload(useDeps(), { actor, programmeId, files, idempotency }),
})
