import { InstrumentListDto } from '#shared/schemas/instrument'
import { listInstruments } from '~~/server/services/instruments'

export default defineRoute({
  variant: 'query',
  permission: 'instrument.see',
  output: InstrumentListDto,
  run: ({ programmeId }) => listInstruments(useDeps(), { programmeId }),
})
