import { httpResource } from '@angular/common/http';
import { type Signal, computed } from '@angular/core';
import type { ColumnLabels } from '@tallystone/contracts/samples/dictionary';
import { labelWords } from '@tallystone/contracts/samples/labels';

/**
 * How the columns of a sample are called: "Card utilisation (%)" by column; columns that the dictionary does not name are not in it. Call in an
 * injection context; nothing is read while `definitionId` gives null, and where reading fails headings stand for themselves.
 *
 * @example protected readonly labels = columnLabels(() => this.binning()?.definitionId ?? null); // labels().get('card_utilisation')
 */
export function columnLabels(definitionId: () => string | null): Signal<ReadonlyMap<string, string>> {
  const read = httpResource<ColumnLabels>(() => {
    const id = definitionId();
    return id === null ? undefined : `/api/sample-definitions/${id}/labels`;
  });
  return computed(() => {
    const labels = read.hasValue() ? read.value().labels : [];
    return new Map(labels.map((entry) => [entry.column, labelWords(entry)]));
  });
}
