import { KindsDto } from '#shared/schemas/preset'
import { describeKinds } from '~~/server/services/describeKinds'

export default defineRoute({
  variant: 'query',
  permission: 'series.see',
  output: KindsDto,
  run: () => describeKinds(useDeps()),
})
