import { z } from 'zod'
import { LigandListDto } from '#shared/schemas/ligand'
import { listLigands } from '~~/server/services/listLigands'

export default defineRoute({
  variant: 'query',
  permission: 'agent.register',
  params: z.object({ programme: z.string() }),
  output: LigandListDto,
  run: ({ programmeId }) => listLigands(useDeps(), { programmeId }),
})
