import type { Migration } from './migration';

export const doubtfulLines: Migration = {
  name: '0134-doubtful-lines',
  async up({ sql }) {
    // Where the doubtful lines of the last refused reading begin in the raw file; what stands there is read from the file.
    await sql('ALTER TABLE samples ADD COLUMN doubtful jsonb');
  },
};
