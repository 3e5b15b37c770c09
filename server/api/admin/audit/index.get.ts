import { AuditPage, AuditQuery } from '../../../../shared/schemas/people'
import { readAudit } from '../../../services/readAudit'
import { INSTALLATION_CHAIN } from '../../../services/unitOfWork'

export default defineRoute({
  variant: 'query',
  permission: 'installation.audit',
  query: AuditQuery,
  output: AuditPage,
  run: ({ query }) => readAudit(useDeps(), { chainId: INSTALLATION_CHAIN, before: query.before ?? null }),
})
