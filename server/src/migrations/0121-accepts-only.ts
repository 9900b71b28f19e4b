import type { Migration } from './migration';

export const acceptsOnly: Migration = {
  name: '0121-accepts-only',
  async up({ sql }) {
    // The fit on accepted applicants alone that stands beside a fit with inference.
    await sql('ALTER TABLE fits ADD COLUMN accepts_only_id uuid REFERENCES fits');
  },
};
