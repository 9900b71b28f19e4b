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

    // Whose rows a run reads: an erasure ends it.
    await sql('ALTER TABLE runs ADD COLUMN sample_id uuid');
    await sql(`CREATE INDEX runs_sample ON runs (sample_id) WHERE state IN ('queued', 'running', 'cancelling')`);

    // A value that fewer than five rows hold is a row rather than a figure.
    await sql(`
      CREATE FUNCTION held_by_five(list jsonb) RETURNS jsonb LANGUAGE sql IMMUTABLE AS $$
        SELECT coalesce(jsonb_agg(entry ORDER BY place) FILTER (WHERE (entry ->> 'count')::int >= 5), '[]')
          FROM jsonb_array_elements(list) WITH ORDINALITY AS listed (entry, place)
      $$`);

    // The application cannot delete who is in which partition: a confirmed definition never changes. This removes it for a sample that has
    // its tombstone, and for no other.
    await sql(`
      CREATE FUNCTION erase_sample_rows(erased uuid) RETURNS void LANGUAGE plpgsql SECURITY DEFINER SET search_path = public AS $$
      BEGIN
        PERFORM 1 FROM samples WHERE id = erased FOR UPDATE;
        IF NOT EXISTS (SELECT 1 FROM sample_erasures WHERE sample_id = erased) THEN
          RAISE EXCEPTION 'Sample % has no tombstone', erased;
        END IF;
        DELETE FROM raw_chunks c USING samples s WHERE s.id = erased AND c.file_id = s.raw_file_id;
        -- What an attempt at reading had stored so far goes with its columns.
        DELETE FROM sample_readings r USING samples s WHERE s.id = erased AND r.sample_id = erased AND r.id IS DISTINCT FROM s.reading_id;
        DELETE FROM column_segments c USING sample_readings r WHERE r.sample_id = erased AND c.reading_id = r.id;
        DELETE FROM definition_segments p USING sample_definitions d WHERE d.sample_id = erased AND p.definition_id = d.id;
        DELETE FROM binning_codes k USING binning_characteristics c, binnings b, sample_definitions d
         WHERE d.sample_id = erased AND b.definition_id = d.id AND c.binning_id = b.id AND k.characteristic_id = c.id;
        UPDATE sample_columns c SET profile = c.profile || jsonb_build_object(
            'mostFrequent', held_by_five(c.profile -> 'mostFrequent'),
            'valuesComplete', (c.profile ->> 'valuesComplete')::boolean AND held_by_five(c.profile -> 'mostFrequent') = c.profile -> 'mostFrequent',
            'specialSuspects', held_by_five(c.profile -> 'specialSuspects'),
            'missingTokens', held_by_five(c.profile -> 'missingTokens'))
          FROM sample_readings r WHERE r.sample_id = erased AND c.reading_id = r.id;
        -- Counts by month follow the order of the groups, so a group of few rows keeps its place and loses its name.
        UPDATE quality_columns q SET detail = jsonb_set(q.detail, '{groups}', (
            SELECT coalesce(jsonb_agg(CASE WHEN entry ->> 'kind' = 'values' AND (entry ->> 'rows')::int < 5
                     THEN entry || '{"label": "fewer than 5 rows"}' ELSE entry END ORDER BY place), '[]')
              FROM jsonb_array_elements(q.detail -> 'groups') WITH ORDINALITY AS listed (entry, place)))
          FROM sample_definitions d WHERE d.sample_id = erased AND q.definition_id = d.id AND q.detail ->> 'kind' = 'categorical';
      END $$`);
    await sql('REVOKE ALL ON FUNCTION erase_sample_rows(uuid) FROM PUBLIC');
    await sql(`GRANT EXECUTE ON FUNCTION erase_sample_rows(uuid) TO ${app}`);

    // Nothing of a row comes back below a tombstone, however late it is written. The lock waits for an erasure under way.
    await sql(`
      CREATE FUNCTION refuse_rows_of_erased() RETURNS trigger LANGUAGE plpgsql SECURITY DEFINER SET search_path = public AS $$
      DECLARE of_sample uuid;
      BEGIN
        IF TG_TABLE_NAME = 'sample_readings' THEN
          of_sample := NEW.sample_id;
        ELSIF TG_TABLE_NAME = 'definition_segments' THEN
          SELECT sample_id INTO of_sample FROM sample_definitions WHERE id = NEW.definition_id;
        ELSE
          SELECT d.sample_id INTO of_sample FROM binning_characteristics c JOIN binnings b ON b.id = c.binning_id
            JOIN sample_definitions d ON d.id = b.definition_id WHERE c.id = NEW.characteristic_id;
        END IF;
        PERFORM 1 FROM samples WHERE id = of_sample FOR KEY SHARE;
        IF EXISTS (SELECT 1 FROM sample_erasures WHERE sample_id = of_sample) THEN
          RAISE EXCEPTION 'The rows of sample % were erased', of_sample;
        END IF;
        RETURN NEW;
      END $$`);
    for (const table of ['sample_readings', 'definition_segments', 'binning_codes'])
      await sql(`CREATE TRIGGER refuse_erased BEFORE INSERT ON ${table} FOR EACH ROW EXECUTE FUNCTION refuse_rows_of_erased()`);
  },
};
