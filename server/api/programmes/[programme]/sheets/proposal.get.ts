import { ProposedDto, ProposeQuery } from '#shared/schemas/tubeSheet'
import { proposeAcquisition } from '~~/server/services/tubeSheets'

export default defineRoute({
  variant: 'query',
  permission: 'sheet.see',
  query: ProposeQuery,
  output: ProposedDto,
  run: ({ query }) => proposeAcquisition(useDeps(), query),
})
