import type { Migration } from './migration';

export const erasures: Migration = {
  name: '0132-erasures',
  async up({ sql, app }) {
    // The tombstone: never changed, never removed.
    await sql(`
      CREATE TABLE sample_erasures (
        sample_id uuid PRIMARY KEY REFERENCES samples,
        reason text NOT NULL,
        erased_by uuid NOT NULL REFERENCES people,
        erased_at timestamptz NOT NULL DEFAULT now()
      )`);
    await sql(`GRANT SELECT, INSERT ON sample_erasures TO ${app}`);
    // The application cannot delete who is in which partition: a confirmed definition never changes. This removes it for a sample that has
    // its tombstone, and for no other.
    await sql(`
      CREATE FUNCTION erase_sample_rows(erased uuid) RETURNS void LANGUAGE plpgsql SECURITY DEFINER SET search_path = public AS $$
      BEGIN
        IF NOT EXISTS (SELECT 1 FROM sample_erasures WHERE sample_id = erased) THEN
          RAISE EXCEPTION 'Sample % has no tombstone', erased;
        END IF;
        DELETE FROM raw_chunks c USING samples s WHERE s.id = erased AND c.file_id = s.raw_file_id;
        DELETE FROM column_segments c USING sample_readings r WHERE r.sample_id = erased AND c.reading_id = r.id;
        DELETE FROM definition_segments p USING sample_definitions d WHERE d.sample_id = erased AND p.definition_id = d.id;
        DELETE FROM binning_codes k USING binning_characteristics c, binnings b, sample_definitions d
         WHERE d.sample_id = erased AND b.definition_id = d.id AND c.binning_id = b.id AND k.characteristic_id = c.id;
        -- A value that fewer than five rows hold is a row rather than a figure.
        UPDATE sample_columns c SET profile = jsonb_set(c.profile, '{mostFrequent}', coalesce(
            (SELECT jsonb_agg(entry) FROM jsonb_array_elements(c.profile -> 'mostFrequent') entry WHERE (entry ->> 'count')::int >= 5), '[]'))
          FROM sample_readings r WHERE r.sample_id = erased AND c.reading_id = r.id;
      END $$`);
    await sql('REVOKE ALL ON FUNCTION erase_sample_rows(uuid) FROM PUBLIC');
    await sql(`GRANT EXECUTE ON FUNCTION erase_sample_rows(uuid) TO ${app}`);
  },
};
