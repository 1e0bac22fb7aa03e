/** The fields that a problem document complains of. */
export const fieldsOf = (response: { body: unknown }): string[] =>
  ((response.body as { errors?: { field: string }[] }).errors ?? [])
    .map((error) => error.field)
    .sort();
