import type { Ref } from 'vue'

/** Width of an element in pixels, kept up to date; `start` until it is measured. Figures are drawn at it and never stretched. */
export function useMeasuredWidth(element: Readonly<Ref<HTMLElement | null>>, start: number) {
  const width = ref(start)
  let observer: ResizeObserver | undefined
  onMounted(() => {
    if (!element.value) return
    observer = new ResizeObserver(([entry]) => { if (entry && entry.contentRect.width > 0) width.value = Math.floor(entry.contentRect.width) })
    observer.observe(element.value)
  })
  onBeforeUnmount(() => observer?.disconnect())
  return width
}
