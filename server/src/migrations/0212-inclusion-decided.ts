import type { Migration } from './migration';

export const inclusionDecided: Migration = {
  name: '0212-inclusion-decided',
  async up({ sql }) {
    // True where a person left a characteristic out, or took one in whose bins tell nobody apart. All else follows from the bins, and changes with them.
    await sql('ALTER TABLE binning_characteristics ADD COLUMN inclusion_decided boolean NOT NULL DEFAULT false');
    // What was left out by classing itself is known by its one sentence; every other reason is somebody's. Who took one in of a single bin did so in the record.
    await sql(`
      UPDATE binning_characteristics c SET inclusion_decided = true
       WHERE (NOT c.included AND c.left_out_reason <> 'Every development row lies in one bin: it tells nobody apart.')
          OR (c.included AND c.summary -> 'warnings' @> '[{"code": "one-bin"}]' AND EXISTS (
               SELECT 1 FROM record r WHERE r.entity = 'binning-characteristic' AND r.entity_id = c.id::text AND r.action = 'binning.taken-in'))`);
  },
};
