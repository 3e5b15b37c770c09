import { mountSuspended } from '@nuxt/test-utils/runtime'
import { describe, expect, it } from 'vitest'
import QuantityText from '~/components/table/QuantityText.vue'
import type { Quantity } from '#shared/evidence/quantity'

const base: Quantity = { value: 4.2031, kind: '=', se: 0.0312, interval: [4.14, 4.26], unit: 'mM^-1 s^-1', evidenceId: null }
async function written(quantity: Quantity | null, props: Record<string, unknown> = {}): Promise<string> {
  const wrapper = await mountSuspended(QuantityText, { props: { quantity, ...props } })
  return wrapper.text().replaceAll('\u00A0', ' ')
}

describe('a number on a screen', () => {
  it('shows value, ± and unit with raised digits, rounded to its error [look.md]', async () => {
    const wrapper = await mountSuspended(QuantityText, { props: { quantity: base } })
    expect(wrapper.text().replaceAll('\u00A0', ' ')).toBe('4.203 ± 0.031 mM−1 s−1')
    expect(wrapper.findAll('sup').map(one => one.text())).toEqual(['−1', '−1'])
  })
  it('shows a lopsided interval instead of ± [look.md: 87 (56 to 140)]', async () => {
    expect(await written({ ...base, value: 87, se: 20, interval: [56, 140], unit: 'y' })).toBe('87 (56 to 140) y')
  })
  it('says bounds in words and gives them no ±', async () => {
    expect(await written({ ...base, value: 0.02, kind: '<', unit: '%' })).toBe('at most 0.02 %')
    expect(await written({ ...base, value: 87, kind: '>', unit: 'y', interval: null })).toMatch(/^at least 87/)
    expect(await written({ ...base, kind: '<' })).not.toContain('±')
  })
  it('says what is not measured, and never 0', async () => {
    expect(await written(null)).toBe('not measured')
    expect(await written(null, { absent: 'missing' })).toBe('missing')
    expect(await written({ ...base, value: Number.NaN })).toBe('not measured')
  })
  it('sets the power behind value and error', async () => {
    expect(await written({ ...base, value: 2.13e-6, se: 0.8e-6, interval: null, unit: '' })).toBe('2.13 ± 0.80 × 10−6')
  })
  it('shows a value without error bare, and says so in its title', async () => {
    const wrapper = await mountSuspended(QuantityText, { props: { quantity: { ...base, se: null, interval: null, unit: '' } } })
    expect(wrapper.text()).toBe('4.2')
    expect(wrapper.attributes('title')).toBe('no standard error given')
  })
  it('is a button that asks where from only when it is evidence', async () => {
    const mute = await mountSuspended(QuantityText, { props: { quantity: base } })
    expect(mute.element.tagName).toBe('SPAN')
    const wrapper = await mountSuspended(QuantityText, { props: { quantity: { ...base, evidenceId: 'e-1' } } })
    expect(wrapper.element.tagName).toBe('BUTTON')
    await wrapper.trigger('click')
    expect(wrapper.emitted('open')).toEqual([['e-1']])
    expect(useWhereFrom().asked.value?.evidenceId).toBe('e-1')
  })
})
