/** A step of processing or a fit that was not made: what is wrong, and what would make it possible. */
export interface ExchangeRefusal {
  readonly ok: false
  readonly reason: string
  readonly message: string
  readonly accepted: string
}

export const refuseExchange = (reason: string, message: string, accepted: string): ExchangeRefusal => ({ ok: false, reason, message, accepted })
