import { BenchDto } from '#shared/schemas/bench'
import { showBench } from '~~/server/services/showBench'

export default defineRoute({
  variant: 'query',
  permission: 'bench.see',
  output: BenchDto,
  run: ({ actor, programmeId }) => showBench(useDeps(), { actor, programmeId }),
})
