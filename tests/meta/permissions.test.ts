import { describe, expect, it } from 'vitest'
import { can, PERMISSIONS, PROGRAMME_ROLES, scopeOf, type Actor, type Permission, type ProgrammeRole } from '../../shared/permissions'

const PERMISSION_NAMES = Object.keys(PERMISSIONS) as Permission[]
const actor = (roles: ProgrammeRole[], isAdministrator = false): Actor => ({
  personId: 'p', sessionId: 's', name: 'n', isAdministrator, memberships: roles.length === 0 ? [] : [{ programmeId: 'mine', programmeCode: 'mine', roles }],
})
const allowed = (one: Actor, programmeId?: string) => PERMISSION_NAMES.filter(permission => can(one, permission, programmeId))

describe('the permission table', () => {
  it('never lets a role do what product.md rules out for it [product: people]', () => {
    const never: Record<ProgrammeRole, Permission[]> = {
      chemist: ['check.sign', 'check.return', 'check.withdraw', 'decision.record', 'profile.save', 'people.invite', 'people.setRoles'],
      physicist: ['decision.record', 'profile.save', 'upload.confirm', 'series.correct', 'people.invite', 'people.setRoles'],
      lead: ['upload.confirm', 'fit.request', 'series.correct', 'record.enter', 'check.sign'],
      // what a partner may fetch of raw files is the programme's to say
      partner: PERMISSION_NAMES.filter(name => !/\.(see|trace|bytes)$/.test(name) && name !== 'account.use'),
    }
    for (const role of PROGRAMME_ROLES) for (const permission of never[role]) expect([role, permission, scopeOf(actor([role]), permission, 'mine')]).toEqual([role, permission, 'none'])
  })

  it('gives a partner signed rows, wherever rows can be unsigned', () => {
    for (const permission of ['agent.see', 'series.see', 'record.see', 'ligand.see', 'number.trace', 'map.see'] as const) expect([permission, scopeOf(actor(['partner']), permission, 'mine')]).toEqual([permission, 'signed'])
  })

  it('gives the administrator no measurement [product: people]', () => {
    expect(allowed(actor([], true), 'mine').filter(permission => !permission.startsWith('installation.') && permission !== 'account.use')).toEqual([])
  })

  it('gives nobody anything in a programme they are no member of, whatever they are elsewhere', () => {
    expect(allowed(actor([...PROGRAMME_ROLES]), 'other')).toEqual(['account.use'])
    expect(allowed(actor([...PROGRAMME_ROLES]))).toEqual(['account.use'])
  })

  it('gives several roles the sum of what each may do, and the widest scope', () => {
    const both = actor(['chemist', 'partner'])
    expect(scopeOf(both, 'agent.see', 'mine')).toBe('programme')
    expect(allowed(both, 'mine').sort()).toEqual([...new Set([...allowed(actor(['chemist']), 'mine'), ...allowed(actor(['partner']), 'mine')])].sort())
  })

  it('denies to roles unknown to it', () => {
    expect(scopeOf(actor(['owner' as ProgrammeRole]), 'agent.see', 'mine')).toBe('none')
  })
})
