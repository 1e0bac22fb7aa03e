/** Told when the server says that nobody is signed in any more. */
type Listener = () => void;
const listeners = new Set<Listener>();

export function announceSignedOut(): void {
  for (const listener of listeners) listener();
}

export function onSignedOut(listener: Listener): () => void {
  listeners.add(listener);
  return () => listeners.delete(listener);
}
