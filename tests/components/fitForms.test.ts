import { mountSuspended } from '@nuxt/test-utils/runtime'
import { describe, expect, it } from 'vitest'
import FitCorrelation from '~/components/fit/FitCorrelation.vue'
import FitOptions from '~/components/fit/FitOptions.vue'
import type { FitOptionDto } from '#shared/schemas/fit'

const SPECS: FitOptionDto[] = [
  { key: 'interval', label: 'Interval', type: 'choice', choices: [{ value: 'student', label: 'Student' }, { value: 'profile', label: 'profile' }], min: null, max: null, unit: null, standard: 'student', help: 'How the interval is found', models: null },
  { key: 'skipEchoes', label: 'Skipped echoes', type: 'integer', choices: [], min: 0, max: 8, unit: null, standard: 0, help: 'From the start of the train', models: ['multiEcho'] },
]
const mount = (more: Record<string, unknown> = {}) => mountSuspended(FitOptions, { props: { specs: SPECS, modelId: 'multiEcho', error: null, modelValue: {}, ...more } })
type Wrapper = Awaited<ReturnType<typeof mount>>
const last = (wrapper: Wrapper) => wrapper.emitted('update:modelValue')?.at(-1)?.[0]

describe('options of a fit', () => {
  it('are those of the chosen model, at their standard until somebody chooses', async () => {
    expect((await mount()).findAll('label').map(label => label.text())).toEqual(['Interval', 'Skipped echoes'])
    const other = await mount({ modelId: 'multiEchoOffset' })
    expect(other.findAll('label').map(label => label.text())).toEqual(['Interval'])
    expect(other.find('select').element.value).toBe('student')
  })
  it('are not sent at their standard, so that equal fits say the same', async () => {
    const wrapper = await mount()
    await wrapper.find('select').setValue('profile')
    expect(last(wrapper)).toEqual({ interval: 'profile' })
    await wrapper.setProps({ modelValue: { interval: 'profile' } })
    await wrapper.find('select').setValue('student')
    expect(last(wrapper)).toEqual({})
  })
  it('refuse a fraction where a whole number is asked, in words', async () => {
    const wrapper = await mount({ modelValue: { skipEchoes: 1.5 } })
    await wrapper.find('input').trigger('blur')
    expect(wrapper.text()).toContain('Accepted: whole numbers.')
  })
  it('show what the server says of one at its field', async () => {
    const wrapper = await mount({ error: { field: 'options.skipEchoes', message: 'Nothing would be left.' } })
    expect(wrapper.get('input').attributes('aria-invalid')).toBe('true')
    expect(wrapper.text()).toContain('Nothing would be left.')
    expect((await mount({ error: { field: 'modelId', message: 'No such model.' } })).text()).not.toContain('No such model.')
  })
})

describe('a correlation table', () => {
  it('has its lower triangle, names in rows and columns, and strong ones in bold', async () => {
    const wrapper = await mountSuspended(FitCorrelation, { props: { caption: 'Correlations', correlation: { names: ['a', 'b', 'c'], labels: ['a', 'b', 'T_1'], matrix: [[1, -0.98, 0.3], [-0.98, 1, 0.1], [0.3, 0.1, 1]] } } })
    expect(wrapper.findAll('tbody th').map(cell => cell.text())).toEqual(['b', 'T1'])
    const cells = wrapper.findAll('tbody td')
    expect(cells.filter(cell => cell.classes('font-semibold')).map(cell => cell.text().replace('−', '-'))).toEqual(['-0.980'])
    expect(cells.filter(cell => cell.text() === '')).toHaveLength(1)
  })
})
