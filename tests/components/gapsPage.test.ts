import { mountSuspended, registerEndpoint } from '@nuxt/test-utils/runtime'
import { describe, expect, it } from 'vitest'
import GapsPage from '~/pages/[programme]/gaps.vue'
import type { ProgrammeRole } from '#shared/permissions'
import type { GapListDto, GapRowDto } from '#shared/schemas/gap'
import type { SessionMembership, SessionPerson } from '#shared/schemas/session'

const gap = (more: Partial<GapRowDto>): GapRowDto => ({
  agent: 'TS-01', mechanism: 'T1', topology: 'ring', key: 'loss', what: 'rate constants: none', who: 'chemist', rankNow: [1, 4], rankThen: null, places: 3, isAtMost: true, share_frac: 0.6, limits: [], note: null, assignment: null, seq: 0, ...more,
})
const LIST: GapListDto = {
  profile: 'T1, 3 T, version 1', draws: 1024, placed: 3, openPlaces: 5, members: [{ id: 'a', name: 'Ada Test' }],
  gaps: [gap({}), gap({ agent: 'TS-02', assignment: { assigneeId: 'a', assignee: 'Ada Test', due: '2026-03-20', note: null, by: 'The lead', at: '2026-03-02T09:00:00.000Z', isOverdue: false } })],
}

async function pageFor(role: ProgrammeRole) {
  registerEndpoint('/api/programmes/p/gaps', () => LIST)
  const session = useSessionStore()
  session.accept({
    person: { personId: 'x', name: 'X', email: 'x@example.org', isAdministrator: false } as SessionPerson, counts: { checks: null },
    memberships: [{ programmeId: 'i', programmeCode: 'p', programmeName: 'P', roles: [role] } as SessionMembership],
  })
  return await mountSuspended(GapsPage)
}

describe('the page of the gaps', () => {
  it('says the profile, how many places are open and what an open place is, and lets the lead ask', async () => {
    const page = await pageFor('lead')
    expect(page.text()).toContain('2 gaps under T1, 3 T, version 1; 3 agents in the plane, 5 places open')
    expect(page.text()).toContain('1024 draws under the stated model')
    expect(page.findAll('[data-gap]')).toHaveLength(2)
    expect(page.text()).toContain('Ask somebody…')
  })

  it('shows those that nobody is asked for, and gives others nothing to press', async () => {
    const page = await pageFor('chemist')
    await page.find('input[type=radio][value=nobody]').setValue()
    expect(page.findAll('[data-gap]').map(row => row.attributes('data-gap'))).toEqual(['TS-01 loss'])
    expect(page.text()).not.toContain('Ask somebody…')
  })
})
