/** Names of the job queues; made by the migrating role, so that serving needs no right to create. */
export const queues = ['site-work'] as const;

/** Wakes the work on a site. What is to be done stands in the database; waking twice does no harm. */
export interface SiteQueue {
  wake(organisationId: number, siteId: number): Promise<void>;
}
