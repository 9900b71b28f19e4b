import type { Migration } from './migration';

export const notHere: Migration = {
  name: '0211-not-here',
  async up({ sql }) {
    // What an earlier binning decided about columns that this one does not class: they have no characteristic here that could hold it.
    await sql(`ALTER TABLE binnings ADD COLUMN not_here jsonb NOT NULL DEFAULT '[]'`);
  },
};
