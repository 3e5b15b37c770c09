import type { Permission } from '#shared/permissions'

export interface FramePage { key: string, words: string, to: string, count: number | null }
interface PageRow { key: string, words: string, permission: Permission }

const PAGES: readonly PageRow[] = [
  { key: 'bench', words: 'Bench', permission: 'bench.see' },
  { key: 'agents', words: 'Agents', permission: 'agent.see' },
  { key: 'series', words: 'Series', permission: 'series.see' },
  { key: 'checks', words: 'Checks', permission: 'check.queue' },
  { key: 'stability', words: 'Stability', permission: 'record.see' },
  { key: 'map', words: 'Map', permission: 'map.see' },
  { key: 'decisions', words: 'Decisions', permission: 'decision.see' },
]
const KEEPING: readonly PageRow[] = [
  { key: 'gaps', words: 'Gaps', permission: 'gap.see' },
  { key: 'ligands', words: 'Choosing a ligand', permission: 'ligand.see' },
  { key: 'sheets', words: 'Tube sheets', permission: 'sheet.see' },
  { key: 'instruments', words: 'Instruments', permission: 'instrument.see' },
  { key: 'people', words: 'People of the programme', permission: 'people.see' },
  { key: 'settings', words: 'Programme settings', permission: 'programme.configure' },
]
const INSTALLATION: readonly PageRow[] = [
  { key: 'people', words: 'People', permission: 'installation.people' },
  { key: 'programmes', words: 'Programmes', permission: 'installation.programmes' },
  { key: 'audit', words: 'Audit', permission: 'installation.audit' },
  { key: 'mail', words: 'Mail', permission: 'installation.mail' },
  { key: 'system', words: 'System', permission: 'installation.system' },
]

/** The pages that the person may open, by the one permission table: of the programme looked at, and of the installation. */
export function useProgrammePages() {
  const session = useSessionStore()
  const within = (rows: readonly PageRow[]): FramePage[] => {
    const code = session.programmeCode
    if (!code) return []
    return rows.filter(row => session.may(row.permission))
      .map(row => ({ key: row.key, words: row.words, to: `/${code}/${row.key}`, count: row.key === 'checks' ? session.counts.checks : null }))
  }
  return {
    pages: computed(() => within(PAGES)),
    keeping: computed(() => within(KEEPING)),
    installation: computed<FramePage[]>(() => INSTALLATION.filter(row => session.may(row.permission))
      .map(row => ({ key: row.key, words: row.words, to: `/admin/${row.key}`, count: null }))),
  }
}
