import { z } from 'zod'
import { LigandChoiceDto, LigandChoiceQuery } from '#shared/schemas/ligandChoice'
import { chooseLigand } from '~~/server/services/chooseLigand'

export default defineRoute({
  variant: 'query',
  permission: 'ligand.see',
  params: z.object({ programme: z.string() }),
  query: LigandChoiceQuery,
  output: LigandChoiceDto,
  run: ({ programmeId, scope, query }) => chooseLigand(useDeps(), { programmeId, scope, query }),
})
