-- Custom: Drizzle Kit cannot express partitions and triggers. The record and the signatures are append-only. The
-- application serves as a role that does not own the tables, so it can neither disable these triggers nor drop
-- them; their owner meets them too, and would have to remove them first, in plain sight.
DO $$ BEGIN
  FOR part IN 0..31 LOOP
    EXECUTE format('CREATE TABLE record_entry_%s PARTITION OF record_entry FOR VALUES WITH (MODULUS 32, REMAINDER %s)', lpad(part::text, 2, '0'), part);
  END LOOP;
END $$;
--> statement-breakpoint
CREATE FUNCTION refuse_change() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  RAISE EXCEPTION '% is append-only', TG_TABLE_NAME USING ERRCODE = 'restrict_violation';
END $$;
--> statement-breakpoint
CREATE TRIGGER record_entry_append_only BEFORE UPDATE OR DELETE ON record_entry
  FOR EACH ROW EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER record_entry_no_truncate BEFORE TRUNCATE ON record_entry
  FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
-- A statement trigger of the parent does not fire when a partition is truncated by its own name.
DO $$ BEGIN
  FOR part IN 0..31 LOOP
    EXECUTE format('CREATE TRIGGER record_entry_no_truncate BEFORE TRUNCATE ON record_entry_%s FOR EACH STATEMENT EXECUTE FUNCTION refuse_change()', lpad(part::text, 2, '0'));
  END LOOP;
END $$;
--> statement-breakpoint
CREATE TRIGGER signature_append_only BEFORE UPDATE OR DELETE ON signature
  FOR EACH ROW EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER signature_no_truncate BEFORE TRUNCATE ON signature
  FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER check_append_only BEFORE UPDATE OR DELETE ON "check"
  FOR EACH ROW EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER release_append_only BEFORE UPDATE OR DELETE ON release
  FOR EACH ROW EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER study_event_append_only BEFORE UPDATE OR DELETE ON study_event
  FOR EACH ROW EXECUTE FUNCTION refuse_change();
