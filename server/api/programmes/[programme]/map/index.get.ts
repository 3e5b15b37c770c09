import { z } from 'zod'
import { MapDto } from '#shared/schemas/map'
import { showMap } from '~~/server/services/showMap'

export default defineRoute({
  variant: 'query',
  permission: 'map.see',
  params: z.object({ programme: z.string() }),
  output: MapDto,
  run: ({ programmeId, scope }) => showMap(useDeps(), { programmeId, scope }),
})
