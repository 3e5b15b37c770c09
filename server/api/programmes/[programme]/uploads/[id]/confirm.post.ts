import { ConfirmRequest, ConfirmedDto, UploadParams } from '#shared/schemas/upload'
import { confirmUpload } from '~~/server/services/confirmUpload'

export default defineRoute({
  variant: 'json',
  permission: 'upload.confirm',
  params: UploadParams,
  body: ConfirmRequest,
  output: ConfirmedDto,
  run: ({ params, body, actor, programmeId, idempotency }) => confirmUpload(useDeps(), { actor, programmeId, id: params.id, draft: body.draft, idempotency }),
})
