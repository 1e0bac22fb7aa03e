/** How well the data carry what is said of an area on a day. The server grades, the client words and draws. */

/** From best to worst: a day has the worst of what holds of it. */
export const trustGrades = ['covered', 'settling', 'coarse', 'inferred', 'missing'] as const;
export type TrustGrade = (typeof trustGrades)[number];

/** What each grade means, in one line. */
export const trustMeanings: Record<TrustGrade, string> = {
  covered: 'The uploads speak for the day, and nothing speaks against them.',
  settling: 'Finishes of the day are still being posted: later uploads may change its figures.',
  coarse: 'Times are too coarse beside the process time: flow and process times are blurred.',
  inferred: 'Many stays rest on times that were not recorded and are taken from other records.',
  missing: 'Data are missing: no upload speaks for the day, or far less is told than is usual.',
};

/** How bad a grade is: 0 for the best. */
export const trustRank = (grade: TrustGrade): number => trustGrades.indexOf(grade);

/** The worst of some grades; covered where there is none. */
export const worstGrade = (grades: readonly TrustGrade[]): TrustGrade =>
  grades.reduce<TrustGrade>(
    (worst, grade) => (trustRank(grade) > trustRank(worst) ? grade : worst),
    'covered',
  );

/** What may be wrong with a site's data as a whole. */
export const trustNoticeKinds = ['finish-filtered', 'area-behind', 'clock-offset'] as const;
export type TrustNoticeKind = (typeof trustNoticeKinds)[number];
