import * as format from '#shared/format'

/** How numbers, units and times are written on screens; the functions live in shared/format so that memos and mails write the same. */
export function useFormat() {
  return format
}
