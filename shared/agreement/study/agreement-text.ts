import type { Interval } from "#shared/agreement/interval.ts";
import type { Agreement } from "#shared/agreement/study/agree.ts";

/** An agreement as lines for a terminal: totals first, every number with what it is conditional on. */
export function agreementText(found: Agreement): string {
  const lines = [`${found.passes.length} passes, ${found.annotators.length} annotators, ${found.totals.length} specimens`, ""];
  lines.push("Totals of each specimen");
  for (const { specimen, passes } of found.totals)
    for (const one of passes)
      lines.push(
        `  ${specimen}  ${one.annotator} pass ${one.pass}: ${one.origins} origins, ${one.insertions} insertions, ${one.length.toFixed(1)} mm`,
      );
  lines.push("", "Items (strands)");
  for (const one of found.items.strands)
    lines.push(
      `  ${one.specimen}: ${one.matched} of ${one.union} ${one.title.replace("given that ", "")}, ${percent(one.nearGateShare)} near the gate of ${one.toleranceMm} mm. ${one.note}`,
    );
  const { strands, ends, rates } = found.detection;
  lines.push("", `Positive agreement: strands ${number(strands.positive.value)}${between(strands.overSpecimens.jackknife)}`);
  lines.push(`  ends ${number(ends.positive.value)}${between(ends.overSpecimens.jackknife)}`);
  for (const { a, b, value, both, onlyOne } of ends.pairs)
    lines.push(`  ends, ${a} and ${b}: ${number(value)} (${both} by both, ${onlyOne} by one)`);
  if (!rates.best) lines.push(`  rates: ${rates.reasons.best}`);
  lines.push("", "Continuous quantities");
  for (const one of found.continuous) {
    const main = one.overSpecimens["ICC(A,1)"];
    lines.push(
      `  ${one.quantity} (${one.unit}; ${one.title}): ${one.completeRows} of ${one.rows} rows complete, ICC(A,1) ${number(main.value)}${between(main.jackknife)}, SEM ${number(one.error.semAgreement)}, SDC ${number(one.error.sdcAgreement)}`,
    );
    if (main.value === null) lines.push(`    ${main.reasons.value}`);
    else if (!main.jackknife) lines.push(`    ${main.reasons.jackknife}`);
    for (const { a, b, bias, lowerLimit, upperLimit } of one.blandAltman)
      lines.push(`    ${a} - ${b}: bias ${number(bias)}, limits ${number(lowerLimit)} to ${number(upperLimit)}`);
  }
  lines.push("", "Labels");
  for (const one of found.categorical)
    lines.push(
      `  ${one.label} (${one.title}): ${one.items} items, alpha ${number(one.alphaNominal.value)}${between(one.overSpecimens.jackknife)}, AC1 ${number(one.ac1.value)}`,
    );
  if (found.intra.length > 0) lines.push("", "The same annotator again");
  for (const one of found.intra)
    lines.push(
      `  ${one.annotator}, ${one.specimen}, passes ${one.passes.join(" and ")}${one.days === null ? "" : `, ${one.days.toFixed(0)} days apart`}: strands ${number(one.strands.value)}`,
    );
  for (const { annotator, quantity, unit, drift } of found.own)
    if (quantity === "total length" || quantity === "strand length")
      lines.push(`  ${annotator}, ${quantity}: later minus earlier ${number(drift.bias)} ${unit}${between(drift.biasInterval)}`);
  if (found.method) {
    const { distances } = found.method;
    lines.push(
      "",
      `${found.method.method} against the annotators: D ${number(distances.difference)} mm, one-sided 95 % bound ${number(distances.upperBound)} mm`,
    );
    lines.push(`  ${distances.verdict ?? distances.reasons.verdict}`);
  }
  return lines.join("\n");
}

function number(value: number | null): string {
  return value === null ? "-" : value.toFixed(3);
}

function percent(value: number | null): string {
  return value === null ? "-" : `${(100 * value).toFixed(0)} %`;
}

function between(interval: Interval | null): string {
  if (!interval) return "";
  return ` (${interval.low.toFixed(3)} to ${interval.high.toFixed(3)}${interval.weak ? ", weak" : ""})`;
}
