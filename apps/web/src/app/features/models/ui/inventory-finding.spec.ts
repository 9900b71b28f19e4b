import { inventoryFinding } from './inventory-finding';

describe('inventoryFinding', () => {
  it('says how many stand where, in the order of a life', () => {
    expect(inventoryFinding([{ state: 'In use' }, { state: 'In development' }, { state: 'In use' }], false)).toBe(
      '3 models: 1 in development and 2 in use.',
    );
    expect(inventoryFinding([{ state: 'In use' }, { state: 'In use' }], false)).toBe('2 models, all in use.');
    expect(inventoryFinding([{ state: 'Submitted' }], false)).toBe('1 model, submitted.');
  });

  it('tells an empty inventory from an empty search', () => {
    expect(inventoryFinding([], false)).toBe('No model has been entered yet.');
    expect(inventoryFinding([], true)).toBe('No model fits this search.');
    expect(inventoryFinding([{ state: 'Retired' }], true)).toBe('1 model found, retired.');
  });
});
