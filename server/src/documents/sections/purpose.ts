import type { Writer } from '../page/writer';

/** 2 Purpose, use, limits. */
export function writePurpose(writer: Writer): void {
  const { model } = writer.input;
  writer.beginSection('2', 'Purpose, use, limits');
  writer.facts([
    ['Inventory number', model.inventoryNumber],
    ['Name', model.name],
    ['Purpose', model.purpose],
    ['Product', model.product],
    ['Population', model.population],
    ['Jurisdiction', model.jurisdiction],
    ['Owner', model.owner],
    ['Materiality tier', String(model.materialityTier)],
    ['Intended use', model.intendedUse],
    ['Prohibited use', model.prohibitedUse],
  ]);
  writer.authorTexts(2, []);
  writer.caution(
    'Use outside the stated product, population or jurisdiction has not been examined and is not supported by the figures in this document.',
  );
}
