/** Every address of the client, in one place. The period stays in the search of each. */
export const paths = {
  home: '/',
  signIn: '/sign-in',
  firstAdmin: '/first-admin',
  sites: '/sites',
  floor: (siteId: number) => `/sites/${siteId}/floor`,
  zone: (siteId: number, zoneId: number) => `/sites/${siteId}/zones/${zoneId}`,
  trust: (siteId: number) => `/sites/${siteId}/trust`,
  intake: (siteId: number) => `/sites/${siteId}/intake`,
  job: (siteId: number, jobKey: string) => `/sites/${siteId}/jobs/${encodeURIComponent(jobKey)}`,
  row: (siteId: number, uploadId: number, line: number) =>
    `/sites/${siteId}/uploads/${uploadId}/rows/${line}`,
  planted: (siteId: number) => `/sites/${siteId}/planted`,
  areas: (siteId: number) => `/sites/${siteId}/areas`,
  accessKeys: (siteId: number) => `/sites/${siteId}/access-keys`,
} as const;
