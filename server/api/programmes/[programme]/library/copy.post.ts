import { z } from 'zod'
import { LibraryCopied, LibraryCopyInput } from '#shared/schemas/library'
import { copyFromLibrary } from '~~/server/services/copyFromLibrary'

export default defineRoute({
  variant: 'json',
  permission: 'library.copy',
  params: z.object({ programme: z.string() }),
  body: LibraryCopyInput,
  output: LibraryCopied,
  run: ({ actor, programmeId, body, idempotency }) => copyFromLibrary(useDeps(), { actor, programmeId, body, idempotency }),
})
