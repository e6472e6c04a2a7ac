/** Whether this browser may look in: null until the service said so. */
export type Standing = 'inside' | 'outside' | 'spent' | 'no-contact' | null

/** How a shared page stands to the service; `ended`: the link opens nothing any more. */
export type Tie = 'opening' | 'live' | 'lost' | 'unfollowed' | 'ended'

/** The owner’s token in the fragment of an address, where no server’s log sees it; null without one. */
export const ownerToken = (hash: string): string | null => /^#owner=([\w-]+)$/.exec(hash)?.[1] ?? null

/** What the answer to a sign-in means for the person who holds the link; status null: taken, 0: no answer. */
export function standingAfter(status: number | null): Standing {
  if (status === null) return 'inside'
  return status === 0 || status >= 500 ? 'no-contact' : 'spent'
}

/** The token in the fragment of a share link. */
export const shareToken = (hash: string): string => hash.replace(/^#(token=)?/, '')

/** What a refusal means for the holder of a share link; without a token the owner’s cookie answers, and opens no day. */
export function tieAfter(status: number, code = ''): Tie {
  if (code === 'no-such-share' || status === 401 || status === 403 || status === 410) return 'ended'
  return status === 404 ? 'unfollowed' : 'lost'
}
