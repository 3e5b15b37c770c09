import { mountSuspended } from '@nuxt/test-utils/runtime'
import { afterEach, describe, expect, it, vi } from 'vitest'
import { h, nextTick } from 'vue'
import DialogBox from '~/components/float/DialogBox.vue'
import ToastStack from '~/components/float/ToastStack.vue'
import FigureSave from '~/components/figure/FigureSave.vue'
import WhereFromHost from '~/components/float/WhereFromHost.vue'
import type { Toast } from '~/composables/useToast'
import type { FigureSpec } from '#shared/schemas/figure'
import type { TraceDto } from '#shared/schemas/trace'

const inBody = (selector: string) => [...document.body.querySelectorAll<HTMLElement>(selector)]
const settle = async () => { for (let turn = 0; turn < 6; turn++) await nextTick() }
afterEach(() => vi.useRealTimers())

describe('a dialog', () => {
  const open = (props: Record<string, unknown> = {}) => mountSuspended(DialogBox, {
    props: { open: true, title: 'Sign version 2?', keep: 'Keep it waiting', ...props }, attachTo: document.body,
    slots: { default: () => 'r_1 = 4.2', act: () => h('button', { 'type': 'button', 'data-autofocus': '' }, 'Sign') },
  })
  it('is named by its question, says what stays, and takes the focus in', async () => {
    const wrapper = await open()
    await settle()
    const [dialog] = inBody('[role="dialog"]')
    expect(document.getElementById(dialog!.getAttribute('aria-labelledby')!)!.textContent).toBe('Sign version 2?')
    expect(dialog!.textContent).toContain('Keep it waiting')
    expect(dialog!.contains(document.activeElement)).toBe(true)
    wrapper.unmount()
  })
  it('closes by Escape and by the button that keeps', async () => {
    for (const close of [
      () => document.dispatchEvent(new KeyboardEvent('keydown', { key: 'Escape', bubbles: true })),
      () => inBody('[role="dialog"] button').find(button => button.textContent === 'Keep it waiting')!.click(),
    ]) {
      const wrapper = await open()
      await settle()
      close()
      await settle()
      expect(wrapper.emitted('update:open')?.at(-1)).toEqual([false])
      wrapper.unmount()
    }
  })
})

describe('messages', () => {
  const toast = (id: number, kind: Toast['kind'], text: string): Toast => ({ id, kind, text })
  it('that tell of what was done are a status and go after six seconds; failures are alerts and stay', async () => {
    vi.useFakeTimers()
    const wrapper = await mountSuspended(ToastStack, { props: { toasts: [toast(1, 'done', 'Signed.'), toast(2, 'failure', 'Not signed.')] } })
    expect([wrapper.get('[role="status"]').text(), wrapper.get('[role="alert"]').text()]).toEqual(['Signed.', 'Not signed.'])
    vi.advanceTimersByTime(5900)
    expect(wrapper.emitted('dismiss')).toBeUndefined()
    vi.advanceTimersByTime(200)
    expect(wrapper.emitted('dismiss')).toEqual([[1]])
  })
  it('wait while the pointer is on them, and can be put away by a named button', async () => {
    vi.useFakeTimers()
    const wrapper = await mountSuspended(ToastStack, { props: { toasts: [toast(1, 'done', 'Signed.')] } })
    await wrapper.get('[role="status"]').trigger('mouseenter')
    vi.advanceTimersByTime(20_000)
    expect(wrapper.emitted('dismiss')).toBeUndefined()
    await wrapper.get('[role="status"]').trigger('mouseleave')
    vi.advanceTimersByTime(6100)
    expect(wrapper.emitted('dismiss')).toEqual([[1]])
    await wrapper.get('button[aria-label="Put this message away"]').trigger('click')
    expect(wrapper.emitted('dismiss')).toHaveLength(2)
  })
})

describe('the menu that saves a figure', () => {
  const figure: FigureSpec = { id: 'slope', title: 'R_1 against concentration', text: 'A line.', x: { label: 'c', unit: 'mM', scale: 'linear' }, y: { label: 'R_1', unit: 's^-1', scale: 'linear' }, layers: [{ type: 'points', name: 'tubes', token: 't1', points: [{ x: 0, y: 0.4 }, { x: 1, y: 4.6 }] }] }
  const items = async (drawing: SVGSVGElement | null) => {
    const wrapper = await mountSuspended(FigureSave, { props: { figure, drawing }, attachTo: document.body })
    await wrapper.get('button').trigger('keydown', { key: 'Enter' })
    await settle()
    const words = inBody('[role="menuitem"]').map(item => item.textContent)
    return { wrapper, words }
  }
  it('opens by the keyboard and offers picture, drawing and numbers', async () => {
    const { wrapper, words } = await items(document.createElementNS('http://www.w3.org/2000/svg', 'svg'))
    expect(words).toEqual(['Picture, PNG', 'Drawing, SVG', 'Numbers, CSV'])
    expect(wrapper.get('button').attributes('aria-label')).toBe('Save: R_1 against concentration')
    wrapper.unmount()
  })
  it('offers the numbers alone while the table is shown, and hands over a file named after the figure', async () => {
    const { wrapper, words } = await items(null)
    expect(words).toEqual(['Numbers, CSV'])
    const names: string[] = []
    const url = vi.spyOn(URL, 'createObjectURL').mockReturnValue('blob:figure')
    const click = vi.spyOn(HTMLAnchorElement.prototype, 'click').mockImplementation(function (this: HTMLAnchorElement) { names.push(this.download) })
    inBody('[role="menuitem"]')[0]!.click()
    await settle()
    expect(names).toEqual(['slope-R1-against-concentration.csv'])
    click.mockRestore()
    url.mockRestore()
    wrapper.unmount()
  })
})

describe('where from?', () => {
  const trace = { agentCode: 'SK-07', quantity: 'r1_per_mM_s', value: { value: 4.2, kind: '=', se: 0.1, interval: null, unit: 'mM^-1 s^-1', evidenceId: 'evidence-1' }, steps: [{ id: 'file', title: 'File', lines: ['SK-07.csv'], sha256: 'ab12' }] } as unknown as TraceDto
  async function answered(load: (id: string) => Promise<TraceDto>): Promise<string> {
    const wrapper = await mountSuspended(WhereFromHost, { attachTo: document.body })
    const { ask, answerBy, close } = useWhereFrom()
    const anchor = document.createElement('button')
    document.body.append(anchor)
    answerBy(load)
    ask('evidence-1', anchor)
    await settle()
    const words = inBody('[aria-label="Where from?"]').map(one => one.textContent).join()
    close()
    await settle()
    wrapper.unmount()
    anchor.remove()
    return words
  }
  it('reads the chain of the number that was asked for', async () => {
    const asked: string[] = []
    const words = await answered(async (id) => { asked.push(id); return trace })
    expect(asked).toEqual(['evidence-1'])
    expect(words).toContain('SK-07.csv')
  })
  it('says so where the chain cannot be read, and offers to try again', async () => {
    const words = await answered(async () => { throw new Error('The chain is not open to you.') })
    expect(words).toContain('The chain could not be read.')
    expect(words).toContain('The chain is not open to you.')
  })
})
