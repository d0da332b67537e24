import type { Reasons } from "#shared/agreement/interval.ts";

/** How far annotators mark the same items; items that nobody marked are unknown, so that nothing is corrected for chance. */
export interface PositiveAgreement {
  /** 2a / (2a + b + c), 0-1; over all pairs of annotators, their counts summed. */
  readonly value: number | null;
  /** Items both marked, and only one of two marked, summed over the pairs. */
  readonly both: number;
  readonly onlyOne: number;
  readonly reasons: Reasons;
}

/**
 * Positive (specific) agreement. @param a items both marked. @param b, c items that only the one or only the other marked.
 * @source Feinstein & Cicchetti, J Clin Epidemiol 1990;43:551-558
 */
export function positiveAgreement(a: number, b: number, c: number): PositiveAgreement {
  const marked = 2 * a + b + c;
  const value = marked === 0 ? null : (2 * a) / marked;
  const reasons: Reasons = value === null ? { value: "Nobody marked anything: there is nothing to agree on." } : {};
  return { value, both: a, onlyOne: b + c, reasons };
}

/**
 * Positive agreement of any number of annotators over all their pairs.
 * @param marked shape [items][annotators]; null = this annotator did not do this specimen, so that the pair says nothing.
 */
export function positiveAgreementOf(marked: readonly (readonly (boolean | null)[])[]): PositiveAgreement {
  let both = 0;
  let onlyOne = 0;
  for (const item of marked)
    for (let i = 0; i < item.length; i++)
      for (let j = 0; j < i; j++) {
        if (item[i] === null || item[j] === null) continue;
        if (item[i] && item[j]) both += 1;
        else if (item[i] || item[j]) onlyOne += 1;
      }
  return positiveAgreement(both, onlyOne, 0);
}
