/** What a stream is told: the events of one race day. */
export const dayTopic = (raceId: string, date: string): string => `${raceId}/${date}`

/** What a stream is told of a race as a whole; no date has this name. */
export const raceTopic = (raceId: string): string => `${raceId}/race`

/** Links that were revoked, for the processes that have streams open; no race day has this name. */
export const LINKS = '$links'

/** Told in place of events that are no longer kept, so that the listener asks anew for all that it shows. */
export const MISSED = 'missed'
