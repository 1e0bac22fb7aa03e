import * as accessKeys from './access-keys.ts';
import * as areas from './areas.ts';
import * as auth from './auth.ts';
import * as columnPlans from './column-plans.ts';
import type { Contract } from './contract.ts';
import * as demo from './demo.ts';
import * as figures from './figures.ts';
import * as jobs from './jobs.ts';
import * as server from './server.ts';
import * as setUp from './set-up.ts';
import * as sites from './sites.ts';
import * as trust from './trust.ts';
import * as uploads from './uploads.ts';
import * as zones from './zones.ts';

/** Every call of the API: the published description and the tests walk over this list. */
export const contracts: readonly Contract[] = [
  auth,
  sites,
  uploads,
  columnPlans,
  zones,
  areas,
  figures,
  trust,
  jobs,
  demo,
  setUp,
  accessKeys,
  server,
].flatMap((module) => Object.values(module).filter(isContract));

function isContract(value: unknown): value is Contract {
  return typeof value === 'object' && value !== null && 'path' in value && 'action' in value;
}
