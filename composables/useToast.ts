export interface ToastLink { words: string, to?: string, run?: () => void }
/** One sentence and at most one link. A failure stays until it is put away. */
export interface Toast { id: number, text: string, kind: 'done' | 'failure', link?: ToastLink }

/** Short messages at the lower left: `say` for what was done, `warn` for what was not. */
export function useToast() {
  const toasts = useState<Toast[]>('toasts', () => [])
  const last = useState<number>('toast-last', () => 0)
  function add(kind: Toast['kind'], text: string, link?: ToastLink): number {
    last.value += 1
    toasts.value = [...toasts.value, { id: last.value, text, kind, link }]
    return last.value
  }
  return {
    toasts,
    say: (text: string, link?: ToastLink) => add('done', text, link),
    warn: (text: string, link?: ToastLink) => add('failure', text, link),
    dismiss: (id: number) => { toasts.value = toasts.value.filter(toast => toast.id !== id) },
  }
}
