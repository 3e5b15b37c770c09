import { z } from 'zod'
import { StabilityDto } from '#shared/schemas/stability'
import { showStability } from '~~/server/services/showStability'

export default defineRoute({
  variant: 'query',
  permission: 'record.see',
  params: z.object({ programme: z.string() }),
  output: StabilityDto,
  run: ({ programmeId, scope }) => showStability(useDeps(), { programmeId, scope }),
})
