import { AuditVerdict } from '../../../../shared/schemas/people'
import { auditVerdict } from '../../../services/readAudit'
import { INSTALLATION_CHAIN } from '../../../services/unitOfWork'

export default defineRoute({
  variant: 'query',
  permission: 'installation.audit',
  output: AuditVerdict,
  run: () => auditVerdict(useDeps(), { chainId: INSTALLATION_CHAIN }),
})
