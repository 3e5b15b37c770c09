import { mountSuspended } from '@nuxt/test-utils/runtime'
import { describe, expect, it } from 'vitest'
import ButtonX from '~/components/form/ButtonX.vue'
import FieldArea from '~/components/form/FieldArea.vue'
import FieldFile from '~/components/form/FieldFile.vue'
import FieldNumber from '~/components/form/FieldNumber.vue'
import FieldSelect from '~/components/form/FieldSelect.vue'
import FieldText from '~/components/form/FieldText.vue'

const pH = { label: 'pH', modelValue: null, min: 0, max: 14 }
type Wrapper = { find: (selector: string) => { exists: () => boolean, text: () => string }, emitted: (name: string) => unknown[][] | undefined }
const errorOf = (wrapper: Wrapper) => wrapper.find('.error').exists() ? wrapper.find('.error').text() : null
const lastModel = (wrapper: Wrapper) => wrapper.emitted('update:modelValue')?.at(-1)?.[0]

describe('a number field', () => {
  it('reads a decimal comma as well as a point', async () => {
    const wrapper = await mountSuspended(FieldNumber, { props: pH })
    await wrapper.find('input').setValue('7,4')
    expect(lastModel(wrapper)).toBe(7.4)
  })
  it('speaks up when it is left, never at the first keystroke, and follows from then on', async () => {
    const wrapper = await mountSuspended(FieldNumber, { props: pH })
    await wrapper.find('input').setValue('74')
    expect(errorOf(wrapper)).toBeNull()
    await wrapper.find('input').trigger('blur')
    await wrapper.setProps({ modelValue: 74 })
    expect(errorOf(wrapper)).toBe('Accepted: 0 to 14.')
    await wrapper.find('input').setValue('7.4')
    await wrapper.setProps({ modelValue: 7.4 })
    expect(errorOf(wrapper)).toBeNull()
  })
  it('is null, says so, and keeps the words while they are no number', async () => {
    const wrapper = await mountSuspended(FieldNumber, { props: { ...pH, modelValue: 7 } })
    await wrapper.find('input').setValue('8O4')
    await wrapper.find('input').trigger('blur')
    await wrapper.setProps({ modelValue: null })
    expect(lastModel(wrapper)).toBeNull()
    expect(errorOf(wrapper)).toContain('“8O4” is no number. Accepted:')
    expect(wrapper.find('input').element.value).toBe('8O4')
    expect(wrapper.emitted('valid')?.at(-1)).toEqual([false])
  })
  it('binds label, unit, help and error for readers [WCAG 2.2, 3.3.1, 1.3.1]', async () => {
    const wrapper = await mountSuspended(FieldNumber, { props: { ...pH, label: 'Temperature', unit: '°C', help: 'stored as 310.15 K', error: 'Too warm.' } })
    const input = wrapper.find('input')
    expect(wrapper.find('label').attributes('for')).toBe(input.attributes('id'))
    expect(input.attributes('aria-invalid')).toBe('true')
    const described = (input.attributes('aria-describedby') ?? '').split(' ').map(id => wrapper.find(`[id="${id}"]`).text())
    expect(described).toEqual(['Too warm.', 'stored as 310.15 K'])
    expect(wrapper.text()).toContain('°C')
  })
  it('follows a value set from outside, and leaves what is being typed alone', async () => {
    const wrapper = await mountSuspended(FieldNumber, { props: { ...pH, modelValue: 7 } })
    await wrapper.setProps({ modelValue: 7.25 })
    expect(wrapper.find('input').element.value).toBe('7.25')
    await wrapper.find('input').setValue('7,50')
    await wrapper.setProps({ modelValue: 7.5 })
    expect(wrapper.find('input').element.value).toBe('7,50')
  })
})

describe('the other fields', () => {
  it('show the error of the server until the value changes', async () => {
    const wrapper = await mountSuspended(FieldText, { props: { label: 'E-mail', modelValue: 'a', error: 'No such account.' } })
    expect(errorOf(wrapper)).toBe('No such account.')
    await wrapper.setProps({ modelValue: 'ab' })
    expect(errorOf(wrapper)).toBeNull()
    await wrapper.setProps({ error: 'Still no such account.' })
    expect(errorOf(wrapper)).toBe('Still no such account.')
  })
  it('ask for a reason of the length that stays for good', async () => {
    const wrapper = await mountSuspended(FieldArea, { props: { label: 'Reason', modelValue: 'bubble', minLength: 10, required: true } })
    await wrapper.find('textarea').trigger('blur')
    expect(errorOf(wrapper)).toBe('At least 10 characters; these are 6.')
  })
  it('offer no empty choice once a required one is made', async () => {
    const options = [{ value: 'plasma', label: 'plasma' }, { value: 'buffer', label: 'buffer', group: 'in vitro' }]
    const empty = await mountSuspended(FieldSelect, { props: { label: 'Medium', modelValue: '', options, required: true } })
    expect(empty.findAll('option').map(one => one.element.value)).toEqual(['', 'plasma', 'buffer'])
    expect(empty.find('optgroup').attributes('label')).toBe('in vitro')
    const chosen = await mountSuspended(FieldSelect, { props: { label: 'Medium', modelValue: 'plasma', options, required: true } })
    expect(chosen.findAll('option').map(one => one.element.value)).toEqual(['plasma', 'buffer'])
  })
  it('refuse a file by its ending and size in words, and hand over the good one', async () => {
    const wrapper = await mountSuspended(FieldFile, { props: { line: 'CSV', accept: '.csv', maxBytes: 10 } })
    const drop = async (name: string, text: string) => {
      const event = new Event('drop', { cancelable: true })
      Object.assign(event, { dataTransfer: { types: ['Files'], files: [new File([text], name)] } })
      wrapper.find('.border-dashed').element.dispatchEvent(event)
      await nextTick()
    }
    await drop('a.exe', 'x')
    expect(errorOf(wrapper)).toBe('a.exe was not taken. Accepted: .csv.')
    await drop('a.csv', 'x'.repeat(11))
    expect(errorOf(wrapper)).toContain('Accepted: up to 10')
    await drop('a.csv', '')
    expect(errorOf(wrapper)).toBe('a.csv is empty.')
    expect(wrapper.emitted('files')).toBeUndefined()
    await drop('a.CSV', 'ti;s')
    expect(errorOf(wrapper)).toBeNull()
    expect((wrapper.emitted('files')?.[0]?.[0] as File[])[0]?.name).toBe('a.CSV')
  })
  it('say beside a disabled button what is missing, for eyes and readers', async () => {
    const wrapper = await mountSuspended(ButtonX, { props: { disabled: true, why: 'a reason is missing' }, slots: { default: () => 'Send' } })
    const button = wrapper.find('button')
    expect(button.attributes('disabled')).toBeDefined()
    expect(wrapper.find(`[id="${button.attributes('aria-describedby')}"]`).text()).toBe('a reason is missing')
  })
})
