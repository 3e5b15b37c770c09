import { StagedUploadDto, UploadParams } from '#shared/schemas/upload'
import { showUpload } from '~~/server/services/showUpload'

export default defineRoute({
  variant: 'query',
  permission: 'upload.stage',
  params: UploadParams,
  output: StagedUploadDto,
  run: ({ params, actor, programmeId }) => showUpload(useDeps(), { actor, programmeId, id: params.id }),
})
