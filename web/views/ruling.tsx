/** Unfilled ruling that stands for figures to come. */
export const Ruling = () => <div class="ruling" aria-hidden="true" />
