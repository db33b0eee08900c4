import { type GrantedRole, grantedRoleSchema } from '../../../shared/contracts/rights.ts';

/** One of the roles that an owner can hand out. */
export function RoleChoice(props: { label: string; role: GrantedRole; choose: (role: GrantedRole) => void }) {
  return (
    <select
      aria-label={props.label}
      className="field w-auto"
      value={props.role}
      onChange={(event) => props.choose(grantedRoleSchema.parse(event.target.value))}
    >
      {grantedRoleSchema.options.map((role) => (
        <option key={role}>{role}</option>
      ))}
    </select>
  );
}
