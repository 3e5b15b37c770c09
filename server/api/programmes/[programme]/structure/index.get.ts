import { z } from 'zod'
import { StructureDto, StructureQuery } from '#shared/schemas/structure'
import { proposeFromSmiles } from '~~/server/services/proposeFromSmiles'

export default defineRoute({
  variant: 'query',
  permission: 'agent.see',
  params: z.object({ programme: z.string() }),
  query: StructureQuery,
  output: StructureDto,
  run: async ({ query }) => proposeFromSmiles(query.smiles),
})
