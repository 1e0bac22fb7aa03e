export function findPostgresBinaries(): string | null;
export function ensurePostgres(): void;
