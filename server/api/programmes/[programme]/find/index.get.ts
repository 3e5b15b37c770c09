import { FindDto, FindQuery } from '#shared/schemas/find'
import { findAnything } from '~~/server/services/findAnything'

export default defineRoute({
  variant: 'query',
  permission: 'agent.see',
  query: FindQuery,
  output: FindDto,
  run: ({ query, programmeId, scope }) => findAnything(useDeps(), { programmeId, scope, text: query.q }),
})
