/** Names of the job queues; made by the migrating role, so that serving needs no right to create. */
export const queues = ['site-work'] as const;

export type QueueName = (typeof queues)[number];
