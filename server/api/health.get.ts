import { z } from 'zod'
import { checkHealth } from '../services/checkHealth'

export default defineRoute({
  variant: 'query',
  permission: 'public',
  output: z.object({ ok: z.literal(true) }),
  run: () => checkHealth(useDeps()),
})
