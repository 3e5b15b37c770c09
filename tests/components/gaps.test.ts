import { mountSuspended } from '@nuxt/test-utils/runtime'
import { describe, expect, it } from 'vitest'
import BenchTasks from '~/components/bench/BenchTasks.vue'
import GapTable from '~/components/gap/GapTable.vue'
import ReadinessField from '~/components/readiness/ReadinessField.vue'
import ReadinessList from '~/components/readiness/ReadinessList.vue'
import { type ReadinessDraft, useReadinessForm } from '~/composables/useReadinessForm'
import { READINESS_ITEMS } from '#shared/readiness'
import type { GapRowDto } from '#shared/schemas/gap'
import type { FrozenReadiness, ReadinessPayload } from '#shared/schemas/readiness'

const words = (wrapper: { text: () => string }): string => wrapper.text().replaceAll('\u00A0', ' ').replace(/\s+/g, ' ')
const NOTHING = { ...Object.fromEntries(READINESS_ITEMS.map(item => [item.key, null])), note: null } as ReadinessPayload
const list = (payload: ReadinessPayload | null): FrozenReadiness => ({
  agent: 'TS-01', batches: ['L1'], gaps: ['Viscosity of the stock'], findings: [{ isFlag: true, sentence: 'The amount on hand does not suffice: 5 mg short.' }],
  entry: payload && { id: 'x', versionNo: 2, by: 'A chemist', at: '2026-03-02T09:00:00.000Z', reason: 'Weighed again.', payload },
})

describe('the readiness list on a screen', () => {
  it('says "not measured" where nothing was, zero where nothing is left, and shows the gaps', async () => {
    const shown = words(await mountSuspended(ReadinessList, { props: { list: list({ ...NOTHING, onHand_mg: { kind: '=', value: 0, se: null, conditions: 'all lots' }, solubility_mM: { kind: '>', value: 400, se: null, conditions: null } }) } }))
    expect(shown).toContain('Amount on hand0 mg')
    expect(shown).toContain('Viscosity of the stocknot measured')
    expect(shown).toContain('at least 400 mM')
    expect(shown).toContain('Gaps: Viscosity of the stock.')
    expect(shown).toContain('5 mg short')
  })

  it('says so where nobody entered one', async () => {
    expect(words(await mountSuspended(ReadinessList, { props: { list: list(null) } }))).toContain('Nobody has entered the list yet')
  })
})

describe('the form of a readiness list', () => {
  it('begins with nothing measured and gives back what it was given', () => {
    expect(useReadinessForm(null).toPayload()).toEqual({ ...NOTHING, note: '' })
    const before = { ...NOTHING, stock_mM: { kind: '=', value: 250, se: 4, conditions: 'water' }, needed_mg: { kind: '<', value: 90, se: null, conditions: null } } as ReadinessPayload
    expect(useReadinessForm(before).toPayload()).toMatchObject({ stock_mM: before.stock_mM, needed_mg: { kind: '<', value: 90, se: null } })
  })

  it('asks for a value only where there is one, and for an error only where it is no bound', async () => {
    const [item] = READINESS_ITEMS
    const form = async (kind: ReadinessDraft['kind']) => (await mountSuspended(ReadinessField, { props: { item, modelValue: { kind, value: null, se: null, conditions: '' }, issueFor: () => null } })).text()
    expect(await form('notMeasured')).not.toContain('Value')
    expect(await form('=')).toContain('Standard error')
    expect(await form('<')).not.toContain('Standard error')
  })
})

const gap = (more: Partial<GapRowDto> = {}): GapRowDto => ({
  agent: 'TS-01', mechanism: 'T1', topology: 'ring', key: 'loss', what: 'rate constants: none', who: 'chemist', rankNow: [1, 4], rankThen: null, places: 3, isAtMost: true, share_frac: 0.25, limits: ['Loss, upper 95 %'], note: null, assignment: null, seq: 0, ...more,
})
const assignment = { assigneeId: 'p', assignee: 'Ada Test', due: '2026-03-20', note: 'Soon.', by: 'The lead', at: '2026-03-02T09:00:00.000Z', isOverdue: true }

describe('gaps on a screen', () => {
  it('say what they would settle, which limits they open, and that nobody is asked', async () => {
    const shown = words(await mountSuspended(GapTable, { props: { gaps: [gap(), gap({ key: 'sharperLoss', rankNow: [1, 3], rankThen: [2, 2], places: 2, isAtMost: false })], base: '/p', mayAssign: false } }))
    expect(shown).toContain('at most 3 places, 25 % of those open')
    expect(shown).toContain('place 1 to 3 now, 2 then')
    expect(shown).toContain('opens: Loss, upper 95 %')
    expect(shown).toContain('nobody')
    expect(shown).not.toContain('Ask somebody')
  })

  it('let the lead ask somebody, and name who is asked and what is overdue', async () => {
    const wrapper = await mountSuspended(GapTable, { props: { gaps: [gap({ assignment })], base: '/p', mayAssign: true } })
    expect(words(wrapper)).toMatch(/Ada Test by 20 Mar.*overdue/)
    await wrapper.find('button').trigger('click')
    expect(wrapper.emitted('assign')).toMatchObject([[{ agent: 'TS-01', key: 'loss' }]])
  })

  it('stand on the Bench with their day and who asks', async () => {
    expect(words(await mountSuspended(BenchTasks, { props: { tasks: [{ agent: 'TS-01', key: 'loss', what: 'rate constants: none', assignment }], base: '/p' } }))).toMatch(/TS-01 rate constants: none.*by 20 Mar.*overdue, asked by The lead: Soon\./)
  })
})
