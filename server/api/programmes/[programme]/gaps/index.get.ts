import { GapListDto } from '#shared/schemas/gap'
import { listGaps } from '~~/server/services/gaps'

export default defineRoute({
  variant: 'query',
  permission: 'gap.see',
  output: GapListDto,
  run: ({ programmeId }) => listGaps(useDeps(), { programmeId }),
})
