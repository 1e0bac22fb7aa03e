import { Link } from 'react-router-dom';

export function Breadcrumbs({
  links,
  here,
}: {
  links: readonly { to: string; label: string }[];
  here: string;
}) {
  return (
    <nav aria-label="Where you are" className="no-print text-label text-soft">
      {links.map((link) => (
        <span key={link.to}>
          <Link to={link.to}>{link.label}</Link>
          {' / '}
        </span>
      ))}
      <span aria-current="page">{here}</span>
    </nav>
  );
}
