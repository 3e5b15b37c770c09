/** The line that maps, memos, mails, exports and pages with numbers carry. */
export const CAUTION = 'Screening research only; not for diagnosis, dosing or release of a product.'
