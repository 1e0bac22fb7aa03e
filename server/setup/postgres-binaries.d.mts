export function findPostgresBinaries(version?: string): string | null;
export function ensurePostgres(): void;
