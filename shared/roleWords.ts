import type { ProgrammeRole } from './permissions'

/** What each role does, in the words of the People page and of the sign-in page. */
export const ROLE_WORDS: Readonly<Record<ProgrammeRole, string>> = {
  chemist: 'registers agents, uploads, fits, sends for checking',
  physicist: 'checks, leaves points out, signs or returns; not what they uploaded themselves',
  lead: 'invites people, sets the profile, reads the map, decides',
  partner: 'reads what is signed, the map and decisions; writes nothing',
}
