import { z } from 'zod'
import { SheetFileQuery, SheetParams } from '#shared/schemas/tubeSheet'
import { tubeSheetFile } from '~~/server/services/tubeSheets'
import { sendFile } from '~~/server/utils/sendFile'

export default defineRoute({
  variant: 'file',
  permission: 'sheet.see',
  params: SheetParams,
  query: SheetFileQuery,
  output: z.custom<Uint8Array>(value => value instanceof Uint8Array),
  async run({ event, params, query, programmeId }) {
    return sendFile(event, await tubeSheetFile(useDeps(), { programmeId, code: params.code, form: query.form }))
  },
})
