import type { AccessRow } from './access';
import { baseRows } from './base';
import { documentRows } from './documents';
import { modelRows, sampleRows } from './models';
import { versionRows } from './versions';
import { binningRows, fitRows } from './work';

/** The route x role table. An entity adds its rows here; a route without one fails routes.spec.ts. */
export const accessTable: readonly AccessRow[] = [
  ...baseRows,
  ...modelRows,
  ...binningRows,
  ...fitRows,
  ...versionRows,
  ...documentRows,
  ...sampleRows,
];
