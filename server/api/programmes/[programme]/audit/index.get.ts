import { AuditPage, AuditQuery } from '../../../../../shared/schemas/people'
import { readAudit } from '../../../../services/readAudit'

export default defineRoute({
  variant: 'query',
  permission: 'audit.seeProgramme',
  query: AuditQuery,
  output: AuditPage,
  run: ({ programmeId, query }) => readAudit(useDeps(), { chainId: programmeId, before: query.before ?? null }),
})
