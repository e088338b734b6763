-- Keys that cross modules.
ALTER TABLE "sale_line" ADD CONSTRAINT "sale_line_terms_version_fk" FOREIGN KEY ("terms_version_id") REFERENCES "terms_version"("id");
--> statement-breakpoint
ALTER TABLE "sale_line" ADD CONSTRAINT "sale_line_import_fk" FOREIGN KEY ("import_id") REFERENCES "import_batch"("id");
--> statement-breakpoint
ALTER TABLE "installation" ADD CONSTRAINT "installation_replaces_fk" FOREIGN KEY ("replaces_id") REFERENCES "installation"("id");
--> statement-breakpoint
ALTER TABLE "coverage_decision" ADD CONSTRAINT "decision_previous_fk" FOREIGN KEY ("previous_id") REFERENCES "coverage_decision"("id");
--> statement-breakpoint
-- Roles belong to the cluster, not to the database: another database may have made them.
DO $$ BEGIN
  IF NOT EXISTS (SELECT FROM pg_roles WHERE rolname = 'mendbay_staff') THEN CREATE ROLE mendbay_staff NOLOGIN; END IF;
EXCEPTION WHEN duplicate_object OR unique_violation THEN NULL; END $$;
--> statement-breakpoint
DO $$ BEGIN
  IF NOT EXISTS (SELECT FROM pg_roles WHERE rolname = 'mendbay_portal') THEN CREATE ROLE mendbay_portal NOLOGIN; END IF;
EXCEPTION WHEN duplicate_object OR unique_violation THEN NULL; END $$;
--> statement-breakpoint
DO $$ BEGIN
  EXECUTE format('GRANT mendbay_staff, mendbay_portal TO %I', current_user);
EXCEPTION WHEN unique_violation THEN NULL; END $$;
--> statement-breakpoint
GRANT USAGE ON SCHEMA public TO mendbay_staff, mendbay_portal;
--> statement-breakpoint
GRANT SELECT, INSERT, UPDATE, DELETE ON ALL TABLES IN SCHEMA public TO mendbay_staff;
--> statement-breakpoint
GRANT USAGE, SELECT ON ALL SEQUENCES IN SCHEMA public TO mendbay_staff, mendbay_portal;
--> statement-breakpoint
ALTER DEFAULT PRIVILEGES IN SCHEMA public GRANT SELECT, INSERT, UPDATE, DELETE ON TABLES TO mendbay_staff;
--> statement-breakpoint
ALTER DEFAULT PRIVILEGES IN SCHEMA public GRANT USAGE, SELECT ON SEQUENCES TO mendbay_staff, mendbay_portal;
--> statement-breakpoint
REVOKE UPDATE, DELETE, TRUNCATE ON audit_row FROM mendbay_staff;
--> statement-breakpoint
REVOKE UPDATE, DELETE, TRUNCATE ON entry, coverage_decision FROM mendbay_staff;
--> statement-breakpoint
-- What never changes once written.
CREATE FUNCTION mendbay_refuse_change() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  RAISE EXCEPTION '% is never rewritten', TG_TABLE_NAME USING ERRCODE = 'restrict_violation';
END $$;
--> statement-breakpoint
CREATE TRIGGER entry_is_final BEFORE UPDATE OR DELETE ON entry FOR EACH ROW EXECUTE FUNCTION mendbay_refuse_change();
--> statement-breakpoint
CREATE TRIGGER decision_is_final BEFORE UPDATE OR DELETE ON coverage_decision FOR EACH ROW EXECUTE FUNCTION mendbay_refuse_change();
--> statement-breakpoint
CREATE FUNCTION mendbay_keep_published() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF OLD.published_at IS NOT NULL THEN
    RAISE EXCEPTION 'published terms never change' USING ERRCODE = 'restrict_violation';
  END IF;
  RETURN CASE TG_OP WHEN 'DELETE' THEN OLD ELSE NEW END;
END $$;
--> statement-breakpoint
CREATE TRIGGER terms_version_is_final BEFORE UPDATE OR DELETE ON terms_version FOR EACH ROW EXECUTE FUNCTION mendbay_keep_published();
--> statement-breakpoint
CREATE FUNCTION mendbay_keep_published_clause() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE of_version uuid := CASE TG_OP WHEN 'INSERT' THEN NEW.terms_version_id ELSE OLD.terms_version_id END;
BEGIN
  IF EXISTS (SELECT FROM terms_version v WHERE v.id = of_version AND v.published_at IS NOT NULL) THEN
    RAISE EXCEPTION 'clauses of published terms never change' USING ERRCODE = 'restrict_violation';
  END IF;
  RETURN CASE TG_OP WHEN 'DELETE' THEN OLD ELSE NEW END;
END $$;
--> statement-breakpoint
CREATE TRIGGER clause_is_final BEFORE INSERT OR UPDATE OR DELETE ON clause FOR EACH ROW EXECUTE FUNCTION mendbay_keep_published_clause();
--> statement-breakpoint
-- The audit chain is closed at commit, when every other lock is held already: taken earlier,
-- the chain's lock and a row's lock could wait for each other.
CREATE FUNCTION mendbay_audit_text(r audit_row) RETURNS text LANGUAGE sql IMMUTABLE AS $$
  SELECT concat_ws('|', r.chain_no, encode(coalesce(r.previous_hash, ''::bytea), 'hex'), r.id,
    (extract(epoch FROM r.at) * 1000)::bigint, r.actor_kind, coalesce(r.actor_id::text, '-'), r.actor_name, r.act,
    r.subject_type, r.subject_id, coalesce(r.before::text, '-'), coalesce(r.after::text, '-'), r.request_id)
$$;
--> statement-breakpoint
CREATE FUNCTION mendbay_chain_audit() RETURNS trigger LANGUAGE plpgsql SECURITY DEFINER SET search_path = public AS $$
DECLARE last_row audit_row; mine audit_row;
BEGIN
  PERFORM pg_advisory_xact_lock(7236512);
  SELECT * INTO last_row FROM audit_row WHERE chain_no IS NOT NULL ORDER BY chain_no DESC LIMIT 1;
  UPDATE audit_row SET chain_no = coalesce(last_row.chain_no, 0) + 1, previous_hash = last_row.hash
    WHERE id = NEW.id RETURNING * INTO mine;
  UPDATE audit_row SET hash = sha256(convert_to(mendbay_audit_text(mine), 'UTF8')) WHERE id = NEW.id;
  RETURN NULL;
END $$;
--> statement-breakpoint
CREATE CONSTRAINT TRIGGER audit_chain AFTER INSERT ON audit_row DEFERRABLE INITIALLY DEFERRED
  FOR EACH ROW EXECUTE FUNCTION mendbay_chain_audit();
--> statement-breakpoint
-- Jobs are added in the caller's transaction by whichever role it runs under.
CREATE FUNCTION mendbay_enqueue(task text, body json, at timestamptz, key text) RETURNS void
  LANGUAGE plpgsql SECURITY DEFINER AS $$
BEGIN
  PERFORM graphile_worker.add_job(task, body, run_at => at, job_key => key, max_attempts => 12);
END $$;
--> statement-breakpoint
REVOKE ALL ON FUNCTION mendbay_enqueue FROM PUBLIC;
--> statement-breakpoint
GRANT EXECUTE ON FUNCTION mendbay_enqueue TO mendbay_staff, mendbay_portal;
--> statement-breakpoint
-- Customers: a missing WHERE shows nothing.
CREATE FUNCTION mendbay_account() RETURNS uuid LANGUAGE sql STABLE AS $$
  SELECT nullif(current_setting('mendbay.account', true), '')::uuid
$$;
--> statement-breakpoint
DO $$ DECLARE t text; BEGIN
  -- Rows that carry the account themselves.
  FOREACH t IN ARRAY ARRAY['sale_line','ticket','ticket_unit','entry','cover_window','coverage_decision','message','file',
    'evidence','reading','report','rma','rma_line','fee_notice','receipt_line','bench_test','shipment','replacement','contact'] LOOP
    EXECUTE format('ALTER TABLE %I ENABLE ROW LEVEL SECURITY', t);
    EXECUTE format('CREATE POLICY staff_all ON %I TO mendbay_staff USING (true) WITH CHECK (true)', t);
  END LOOP;
  FOREACH t IN ARRAY ARRAY['sale_line','ticket','ticket_unit','cover_window','coverage_decision','message','file',
    'evidence','reading','report','rma','rma_line','fee_notice','receipt_line','bench_test','shipment','replacement','contact'] LOOP
    EXECUTE format('CREATE POLICY own_account ON %I TO mendbay_portal USING (account_id = mendbay_account()) WITH CHECK (account_id = mendbay_account())', t);
  END LOOP;
END $$;
--> statement-breakpoint
-- Inner notes are in the record, but no customer ever sees one.
-- Read by the ticket's account, not the entry's: a ticket from a stranger finds its account later,
-- and an entry is never rewritten.
CREATE POLICY own_seen ON entry FOR SELECT TO mendbay_portal USING (customer_sees AND EXISTS (
  SELECT FROM ticket t WHERE t.id = ticket_id AND t.account_id = mendbay_account()));
--> statement-breakpoint
CREATE POLICY own_written ON entry FOR INSERT TO mendbay_portal WITH CHECK (EXISTS (
  SELECT FROM ticket t WHERE t.id = ticket_id AND t.account_id = mendbay_account()));
--> statement-breakpoint
ALTER TABLE account ENABLE ROW LEVEL SECURITY;
--> statement-breakpoint
CREATE POLICY staff_all ON account TO mendbay_staff USING (true) WITH CHECK (true);
--> statement-breakpoint
CREATE POLICY own_account ON account FOR SELECT TO mendbay_portal USING (id = mendbay_account());
--> statement-breakpoint
-- A unit is seen by the account that holds its open sale, or that of the system it stands in.
CREATE FUNCTION mendbay_holds(of_unit uuid) RETURNS boolean LANGUAGE sql STABLE SECURITY DEFINER SET search_path = public AS $$
  SELECT EXISTS (SELECT FROM sale_line s WHERE s.unit_id = of_unit AND s.account_id = mendbay_account())
    OR EXISTS (SELECT FROM installation i JOIN sale_line s ON s.id = i.sale_line_id
      WHERE i.unit_id = of_unit AND s.account_id = mendbay_account())
$$;
--> statement-breakpoint
ALTER TABLE unit ENABLE ROW LEVEL SECURITY;
--> statement-breakpoint
CREATE POLICY staff_all ON unit TO mendbay_staff USING (true) WITH CHECK (true);
--> statement-breakpoint
CREATE POLICY held_units ON unit FOR SELECT TO mendbay_portal USING (mendbay_holds(id));
--> statement-breakpoint
ALTER TABLE installation ENABLE ROW LEVEL SECURITY;
--> statement-breakpoint
CREATE POLICY staff_all ON installation TO mendbay_staff USING (true) WITH CHECK (true);
--> statement-breakpoint
CREATE POLICY held_units ON installation FOR SELECT TO mendbay_portal USING (EXISTS (
  SELECT FROM sale_line s WHERE s.id = installation.sale_line_id AND s.account_id = mendbay_account()));
--> statement-breakpoint
ALTER TABLE cover_pause ENABLE ROW LEVEL SECURITY;
--> statement-breakpoint
CREATE POLICY staff_all ON cover_pause TO mendbay_staff USING (true) WITH CHECK (true);
--> statement-breakpoint
CREATE POLICY own_sale ON cover_pause FOR SELECT TO mendbay_portal USING (EXISTS (
  SELECT FROM sale_line s WHERE s.id = cover_pause.sale_line_id AND s.account_id = mendbay_account()));
--> statement-breakpoint
ALTER TABLE ticket_participant ENABLE ROW LEVEL SECURITY;
--> statement-breakpoint
CREATE POLICY staff_all ON ticket_participant TO mendbay_staff USING (true) WITH CHECK (true);
--> statement-breakpoint
CREATE POLICY own_ticket ON ticket_participant TO mendbay_portal
  USING (EXISTS (SELECT FROM ticket t WHERE t.id = ticket_id AND t.account_id = mendbay_account()))
  WITH CHECK (EXISTS (SELECT FROM ticket t WHERE t.id = ticket_id AND t.account_id = mendbay_account()));
--> statement-breakpoint
ALTER TABLE outbox ENABLE ROW LEVEL SECURITY;
--> statement-breakpoint
CREATE POLICY staff_all ON outbox TO mendbay_staff USING (true) WITH CHECK (true);
--> statement-breakpoint
-- The portal puts mails in; it reads none back.
CREATE POLICY put_in ON outbox FOR INSERT TO mendbay_portal WITH CHECK (true);
--> statement-breakpoint
ALTER TABLE parcel ENABLE ROW LEVEL SECURITY;
--> statement-breakpoint
CREATE POLICY staff_all ON parcel TO mendbay_staff USING (true) WITH CHECK (true);
--> statement-breakpoint
CREATE POLICY own_rma ON parcel TO mendbay_portal
  USING (EXISTS (SELECT FROM rma r WHERE r.id = rma_id AND r.account_id = mendbay_account()))
  WITH CHECK (EXISTS (SELECT FROM rma r WHERE r.id = rma_id AND r.account_id = mendbay_account()));
--> statement-breakpoint
GRANT SELECT ON account, contact, site, holiday, model, unit, sale_line, installation, cover_pause, terms, terms_version, clause,
  cover_window, coverage_decision, ticket, ticket_unit, ticket_participant, entry, message, file, evidence, reading, report,
  rma, rma_line, fee_notice, parcel, receipt_line, bench_test, shipment, replacement TO mendbay_portal;
--> statement-breakpoint
GRANT INSERT ON ticket, ticket_unit, ticket_participant, entry, coverage_decision, message, outbox, file, evidence, report, rma,
  rma_line, fee_notice, parcel, audit_row TO mendbay_portal;
--> statement-breakpoint
GRANT UPDATE ON ticket, ticket_unit, file, evidence, report, rma, rma_line, parcel TO mendbay_portal;
--> statement-breakpoint
-- The next reference of a letter, and the next place in the record. Counts what a customer may not
-- see, and locks the ticket so that two writers cannot take one number.
CREATE FUNCTION mendbay_next_entry(of_ticket uuid, of_letter entry_letter, OUT number integer, OUT seq integer)
  LANGUAGE plpgsql SECURITY DEFINER SET search_path = public AS $$
BEGIN
  PERFORM 1 FROM ticket t WHERE t.id = of_ticket FOR UPDATE;
  SELECT coalesce(max(e.number) FILTER (WHERE e.letter = of_letter), 0) + 1, coalesce(max(e.seq), 0) + 1
    INTO number, seq FROM entry e WHERE e.ticket_id = of_ticket;
END $$;
