import { useNavigate } from 'react-router-dom';
import { useSession, useSignOut } from '../features/session/queries.ts';
import { Button } from '../ui/button.tsx';
import { paths } from './paths.ts';
import { useTheme, type Theme } from './theme.ts';

/** Who is signed in, the theme, and the ways out. */
export function AccountMenu({ role }: { role: string | null }) {
  const { session } = useSession();
  const [theme, setTheme] = useTheme();
  const signOut = useSignOut();
  const navigate = useNavigate();
  if (!session) return null;
  const leave = (everywhere: boolean) =>
    signOut.mutate(everywhere, { onSettled: () => void navigate(paths.signIn) });
  return (
    <details className="relative">
      <summary className="cursor-pointer list-none">
        {session.user.name}
        {role ? <span className="text-soft"> · {role}</span> : null}
      </summary>
      <div className="absolute right-0 z-10 mt-2 flex w-64 flex-col gap-3 border border-ink bg-panel p-4">
        <span className="text-soft">{session.user.email}</span>
        <label className="flex items-center justify-between gap-2">
          Theme
          <select
            value={theme}
            onChange={(event) => setTheme(event.target.value as Theme)}
            className="border border-soft bg-white px-2 py-1 text-ink"
          >
            <option value="system">as the system</option>
            <option value="light">light</option>
            <option value="dark">dark</option>
          </select>
        </label>
        <Button onPress={() => leave(false)}>Sign out</Button>
        <Button onPress={() => leave(true)}>Sign out everywhere</Button>
      </div>
    </details>
  );
}
