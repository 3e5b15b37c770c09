import { PreviewDto, PreviewRequest, UploadParams } from '#shared/schemas/upload'
import { previewUpload } from '~~/server/services/previewUpload'

export default defineRoute({
  variant: 'json',
  permission: 'upload.stage',
  params: UploadParams,
  body: PreviewRequest,
  output: PreviewDto,
  run: ({ params, body, actor, programmeId }) => previewUpload(useDeps(), { actor, programmeId, id: params.id, draft: body.draft }),
})
