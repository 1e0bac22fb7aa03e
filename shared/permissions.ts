/** Who may do what. The server enforces this table in one place; the client reads it to show less. */

export const roles = ['admin', 'analyst', 'supervisor', 'consultant'] as const;
export type Role = (typeof roles)[number];

/**
 * Who an action is open to:
 * - `anyone`: also signed out.
 * - `person`: every signed-in person, whatever the role.
 * - `member`: every role in the organisation concerned.
 * - a list of roles; `supervisor-own` is a supervisor for areas they own.
 * `key` says whether a machine's access key may do it at its own site.
 */
export interface Rule {
  open: 'anyone' | 'person' | 'member' | readonly (Role | 'supervisor-own')[];
  key?: true;
}

const analysts = ['admin', 'analyst'] as const;
const analystsAndOwners = ['admin', 'analyst', 'supervisor-own'] as const;

export const policy = {
  'health.read': { open: 'anyone' },
  'api.describe': { open: 'anyone' },
  'session.open': { open: 'anyone' },
  'session.close': { open: 'anyone' },
  'session.read': { open: 'anyone' },
  'session.close-all': { open: 'person' },
  'first-admin.create': { open: 'anyone' },
  'site.list': { open: 'person' },
  'site.read': { open: 'member' },
  'site.create': { open: analysts },
  'site.change': { open: analysts },
  'upload.list': { open: 'member', key: true },
  'upload.read': { open: 'member', key: true },
  'upload.create': { open: analysts, key: true },
  'column-plan.read': { open: 'member' },
  'column-plan.save': { open: analysts },
  'upload.preview': { open: analysts },
  'upload.stop': { open: analysts },
  'upload.read-again': { open: analysts },
  'upload.withdraw': { open: analysts },
  'zone.read': { open: 'member' },
  'zone.create': { open: analysts },
  'zone.change': { open: analysts },
  'area.read': { open: 'member' },
  'area.move': { open: analysts },
  'cap.declare': { open: analystsAndOwners },
  'figures.read': { open: 'member' },
  'job.read': { open: 'member' },
  'access-key.read': { open: ['admin'] },
  'access-key.create': { open: ['admin'] },
  'access-key.revoke': { open: ['admin'] },
  'audit.read': { open: ['admin'] },
} as const satisfies Record<string, Rule>;

export type Action = keyof typeof policy;

/** Whether a member with this role may do it; `ownsArea` says whether the area concerned is theirs. */
export function roleMay(role: Role, action: Action, ownsArea = false): boolean {
  const { open }: Rule = policy[action];
  if (typeof open === 'string') return true;
  if (open.includes(role)) return true;
  return role === 'supervisor' && ownsArea && open.includes('supervisor-own');
}

/** Whether a machine's access key may do it at its own site. */
export function keyMay(action: Action): boolean {
  const rule: Rule = policy[action];
  return rule.key === true;
}
