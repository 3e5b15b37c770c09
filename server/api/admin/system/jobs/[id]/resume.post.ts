import { z } from 'zod'
import { Done } from '../../../../../../shared/schemas/session'
import { resumeParkedJob } from '../../../../../services/systemState'

export default defineRoute({
  variant: 'json',
  permission: 'installation.system',
  params: z.object({ id: z.uuid() }),
  output: Done,
  run: ({ actor, params }) => resumeParkedJob(useDeps(), { actor, jobId: params.id }),
})
