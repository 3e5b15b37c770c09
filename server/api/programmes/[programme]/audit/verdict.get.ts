import { AuditVerdict } from '../../../../../shared/schemas/people'
import { auditVerdict } from '../../../../services/readAudit'

export default defineRoute({
  variant: 'query',
  permission: 'audit.seeProgramme',
  output: AuditVerdict,
  run: ({ programmeId }) => auditVerdict(useDeps(), { chainId: programmeId }),
})
