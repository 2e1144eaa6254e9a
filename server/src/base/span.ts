/** A half-open range of a text, in UTF-16 code units from its start. */
export interface Span {
  readonly start: number;
  readonly end: number;
}
