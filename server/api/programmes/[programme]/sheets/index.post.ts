import { z } from 'zod'
import { SaveTubeSheet } from '#shared/schemas/tubeSheet'
import { saveTubeSheet } from '~~/server/services/tubeSheets'

export default defineRoute({
  variant: 'json',
  permission: 'sheet.make',
  body: SaveTubeSheet,
  output: z.object({ code: z.string() }),
  run: ({ body, actor, programmeId, idempotency }) => saveTubeSheet(useDeps(), { actor, programmeId, sheet: body, idempotency }),
})
