import { InstrumentDto, InstrumentParams } from '#shared/schemas/instrument'
import { showInstrument } from '~~/server/services/instruments'

export default defineRoute({
  variant: 'query',
  permission: 'instrument.see',
  params: InstrumentParams,
  output: InstrumentDto,
  run: ({ params, programmeId }) => showInstrument(useDeps(), { programmeId, id: params.id }),
})
