import { z } from 'zod'
import { readTemplate } from '~~/server/services/describeKinds'
import { sendFile } from '~~/server/utils/sendFile'

export default defineRoute({
  variant: 'file',
  permission: 'series.see',
  params: z.object({ programme: z.string(), kind: z.string().max(60), name: z.string().max(120) }),
  output: z.custom<Uint8Array>(value => value instanceof Uint8Array),
  async run({ event, params }) {
    return sendFile(event, { fileName: params.name, bytes: Buffer.from(await readTemplate(useDeps(), params), 'utf8') })
  },
})
