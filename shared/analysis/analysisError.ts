/** Input that a calculation cannot use. The message says fact, value and remedy; it is shown to people as it is. */
export class AnalysisError extends Error {
  readonly code: string;

  constructor(code: string, message: string) {
    super(message);
    this.name = 'AnalysisError';
    this.code = code;
  }
}
