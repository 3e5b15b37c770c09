import type { ProgrammeRole } from '../../../shared/permissions'

export interface DemoPerson { key: string, name: string, email: string, roles: readonly ProgrammeRole[], isAdministrator: boolean }

/** Invented people of an invented institute; one account per role, and a second chemist and physicist, because nobody signs their own work. */
export const DEMO_PEOPLE = [
  { key: 'idris', name: 'Idris Fenwold', email: 'chemist@skerry.example', roles: ['chemist'], isAdministrator: false },
  { key: 'neve', name: 'Neve Ashgrove', email: 'second.chemist@skerry.example', roles: ['chemist'], isAdministrator: false },
  { key: 'oren', name: 'Oren Thackley', email: 'physicist@skerry.example', roles: ['physicist'], isAdministrator: false },
  { key: 'sunniva', name: 'Sunniva Marlot', email: 'second.physicist@skerry.example', roles: ['physicist', 'chemist'], isAdministrator: false },
  { key: 'mara', name: 'Mara Quill', email: 'lead@skerry.example', roles: ['lead'], isAdministrator: false },
  { key: 'tobin', name: 'Tobin Wexcombe', email: 'partner@skerry.example', roles: ['partner'], isAdministrator: false },
  { key: 'yara', name: 'Yara Stennet', email: 'administrator@skerry.example', roles: [], isAdministrator: true },
] as const satisfies readonly DemoPerson[]

export type DemoPersonKey = (typeof DEMO_PEOPLE)[number]['key']
