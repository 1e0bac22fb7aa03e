import type { ErrorCode } from '../../shared/errors.ts';

/** A request about an upload that cannot be granted, with the sentence that says why. */
export class ReceiptRefused extends Error {
  readonly code: ErrorCode;
  /** What is wrong with which part of the request, all at once. */
  readonly issues: readonly FieldIssue[];

  constructor(code: ErrorCode, message: string, issues: readonly FieldIssue[] = []) {
    super(message);
    this.name = 'ReceiptRefused';
    this.code = code;
    this.issues = issues;
  }
}

export interface FieldIssue {
  field: string;
  message: string;
}
