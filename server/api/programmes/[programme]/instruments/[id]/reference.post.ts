import { InstrumentDto, InstrumentParams, NameReference } from '#shared/schemas/instrument'
import { nameReferenceTube } from '~~/server/services/instruments'

export default defineRoute({
  variant: 'json',
  permission: 'instrument.reference',
  params: InstrumentParams,
  body: NameReference,
  output: InstrumentDto,
  run: ({ params, body, actor, programmeId, idempotency }) => nameReferenceTube(useDeps(), { actor, programmeId, id: params.id, request: body, idempotency }),
})
