import type { DocumentSummary } from '@tallystone/contracts/documents/schema';
import { documentsFinding, staleness, versionDocumentsFinding } from './document-view';

const document = (number: number, change: Partial<DocumentSummary> = {}): DocumentSummary => ({
  id: `d${number}`,
  versionId: 'v1',
  modelId: 'm1',
  modelName: 'Personal loans',
  versionNumber: 1,
  number,
  fileName: `M-0001-version-1-edition-${number}.pdf`,
  bytes: 568_000,
  pages: 27,
  sha256: 'ab'.repeat(32),
  evidenceSha256: 'cd'.repeat(32),
  recordHead: '12 ef',
  madeBy: 'Conrad',
  madeAt: `2026-11-0${number}T13:00:00.000Z`,
  ...change,
});

describe('documents', () => {
  it('are told by the latest edition', () => {
    expect(versionDocumentsFinding([])).toContain('No document yet');
    expect(versionDocumentsFinding([document(1), document(2)])).toMatch(/^Edition 2, 27 pages, made 2\u00A0Nov\u00A02026, .* by Conrad, is the latest\.$/);
  });
  it('are counted across models', () => {
    expect(documentsFinding([])).toBeNull();
    expect(documentsFinding([document(1)])).toBe('1 document of 1 model, kept as it was made.');
    expect(documentsFinding([document(1), document(2), document(1, { modelId: 'm2' })])).toBe('3 documents of 2 models, kept as they were made.');
  });
  it('fall behind when the version moves on', () => {
    const act = { id: 'a', act: 'accept' as const, from: null, to: 'Approved' as const, conclusion: null, conditions: [], statement: '', by: 'C', byId: 'c', role: 'compliance' as const };
    const acts = (at: string) => ({ acts: [{ ...act, at }] });
    expect(staleness([document(1)], acts('2026-11-02T00:00:00.000Z'))).toContain('edition 1');
    expect(staleness([document(1), document(3)], acts('2026-11-02T00:00:00.000Z'))).toBeNull();
    expect(staleness([], acts('2026-11-02T00:00:00.000Z'))).toBeNull();
  });
});
