import type { Migration } from './migration';

export const carriedEdits: Migration = {
  name: '0203-carried-edits',
  async up({ sql }) {
    await sql('ALTER TABLE binnings ADD COLUMN from_binning_id uuid REFERENCES binnings');
    // An edit of an earlier binning; where it makes no sense here, "not_carried" says why and it has no place.
    await sql('ALTER TABLE binning_edits ADD COLUMN carried_from uuid REFERENCES binning_edits');
    await sql(
      `ALTER TABLE binning_edits ADD COLUMN not_carried text CHECK (not_carried IS NULL OR (place IS NULL AND carried_from IS NOT NULL))`,
    );
  },
};
