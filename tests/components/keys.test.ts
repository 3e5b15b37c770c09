import { mountSuspended } from '@nuxt/test-utils/runtime'
import { afterEach, describe, expect, it } from 'vitest'
import type { KeyBinding } from '~/composables/useKeys'

const mounted: { unmount: () => void }[] = []
async function screenWith(bindings: KeyBinding[]) {
  const wrapper = await mountSuspended(defineComponent({
    setup() {
      useKeys(bindings)
      return () => h('div', [h('input', { id: 'typing' }), h('div', { id: 'dialog', role: 'dialog' }, h('button', 'x')), h('button', { id: 'plain' }, 'x')])
    },
  }), { attachTo: document.body })
  mounted.push(wrapper)
  return wrapper
}
function press(key: string, target: EventTarget = document.body, more: KeyboardEventInit = {}): KeyboardEvent {
  const event = new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true, ...more })
  target.dispatchEvent(event)
  return event
}
const counter = () => {
  const seen: string[] = []
  return { seen, bind: (key: string, name = key, enabled?: () => boolean): KeyBinding => ({ key, words: name, run: () => { seen.push(name) }, enabled }) }
}

afterEach(() => {
  mounted.splice(0).forEach(one => one.unmount())
  useKeySwitchOn()
})
function useKeySwitchOn(): void {
  useNuxtApp().runWithContext(() => { useKeySwitch().value = true })
}

describe('single keys', () => {
  it('do their verb, in either case, and swallow the press', async () => {
    const { seen, bind } = counter()
    await screenWith([bind('j'), bind('?'), bind('ArrowLeft')])
    expect(press('j').defaultPrevented).toBe(true)
    press('J', document.body, { shiftKey: true })
    press('?', document.body, { shiftKey: true })
    press('ArrowLeft')
    expect(press('q').defaultPrevented).toBe(false)
    expect(seen).toEqual(['j', 'j', '?', 'ArrowLeft'])
  })
  it('stay quiet while a person types or a dialog is open', async () => {
    const { seen, bind } = counter()
    const wrapper = await screenWith([bind('x')])
    press('x', wrapper.find('#typing').element)
    press('x', wrapper.find('#dialog button').element)
    expect(seen).toEqual([])
    press('x', wrapper.find('#plain').element)
    expect(seen).toEqual(['x'])
  })
  it('leave the shortcuts of the browser alone', async () => {
    const { seen, bind } = counter()
    await screenWith([bind('r')])
    for (const more of [{ ctrlKey: true }, { metaKey: true }, { altKey: true }]) expect(press('r', document.body, more).defaultPrevented).toBe(false)
    expect(seen).toEqual([])
  })
  it('can be switched off [WCAG 2.2, 2.1.4]', async () => {
    const { seen, bind } = counter()
    await screenWith([bind('s')])
    useNuxtApp().runWithContext(() => { useKeySwitch().value = false })
    await nextTick()
    press('s')
    expect(seen).toEqual([])
  })
  it('answer once, to the screen that came last, and to nobody after it has gone', async () => {
    const { seen, bind } = counter()
    await screenWith([bind('m', 'page')])
    const top = await screenWith([bind('m', 'drawer')])
    press('m')
    top.unmount()
    press('m')
    expect(seen).toEqual(['drawer', 'page'])
    mounted.splice(0).forEach(one => one.unmount())
    press('m')
    expect(seen).toHaveLength(2)
    expect(useNuxtApp().runWithContext(() => useKeyRegistry().value)).toEqual([])
  })
  it('pass by a binding that is not enabled now', async () => {
    const { seen, bind } = counter()
    await screenWith([bind('c', 'compare', () => false), bind('c', 'other')])
    press('c')
    expect(seen).toEqual(['other'])
  })
})
