-- Swaps of a place up to each part, for what was recorded before the column came.
WITH RECURSIVE chain AS (
  SELECT i.id, CASE WHEN i.source = 'swap' THEN ARRAY[i.from_on] ELSE ARRAY[]::date[] END AS days
    FROM installation i WHERE i.replaces_id IS NULL
  UNION ALL
  SELECT n.id, c.days || CASE WHEN n.source = 'swap' THEN ARRAY[n.from_on] ELSE ARRAY[]::date[] END
    FROM installation n JOIN chain c ON c.id = n.replaces_id)
UPDATE installation i SET swaps = c.days FROM chain c WHERE c.id = i.id AND c.days <> '{}';
--> statement-breakpoint
-- A whole unit that took over a sale: its line's key ends with the day it did.
UPDATE sale_line SET swaps = ARRAY[substring(line_key FROM '\|(\d{4}-\d{2}-\d{2})$')::date]
  WHERE line_key ~ '\|\d{4}-\d{2}-\d{2}$';
--> statement-breakpoint
ALTER TABLE goodwill ENABLE ROW LEVEL SECURITY;
--> statement-breakpoint
CREATE POLICY staff_all ON goodwill TO mendbay_staff USING (true) WITH CHECK (true);
--> statement-breakpoint
-- What was granted or declined stays as it was answered.
CREATE FUNCTION mendbay_keep_goodwill() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF TG_OP = 'DELETE' OR OLD.state <> 'asked' THEN
    RAISE EXCEPTION 'answered goodwill is never rewritten' USING ERRCODE = 'restrict_violation';
  END IF;
  RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER goodwill_is_final BEFORE UPDATE OR DELETE ON goodwill FOR EACH ROW EXECUTE FUNCTION mendbay_keep_goodwill();
--> statement-breakpoint
ALTER TABLE sale_transfer ENABLE ROW LEVEL SECURITY;
--> statement-breakpoint
CREATE POLICY staff_all ON sale_transfer TO mendbay_staff USING (true) WITH CHECK (true);
--> statement-breakpoint
CREATE POLICY own_sale ON sale_transfer FOR SELECT TO mendbay_portal USING (EXISTS (
  SELECT FROM sale_line s WHERE s.id = sale_transfer.sale_line_id AND s.account_id = mendbay_account()));
--> statement-breakpoint
ALTER TABLE terms_preview ENABLE ROW LEVEL SECURITY;
--> statement-breakpoint
CREATE POLICY staff_all ON terms_preview TO mendbay_staff USING (true) WITH CHECK (true);
--> statement-breakpoint
-- A draft is nobody's terms yet: customers read published issues only.
ALTER TABLE terms_version ENABLE ROW LEVEL SECURITY;
--> statement-breakpoint
CREATE POLICY staff_all ON terms_version TO mendbay_staff USING (true) WITH CHECK (true);
--> statement-breakpoint
CREATE POLICY published ON terms_version FOR SELECT TO mendbay_portal USING (published_at IS NOT NULL);
--> statement-breakpoint
ALTER TABLE clause ENABLE ROW LEVEL SECURITY;
--> statement-breakpoint
CREATE POLICY staff_all ON clause TO mendbay_staff USING (true) WITH CHECK (true);
--> statement-breakpoint
CREATE POLICY published ON clause FOR SELECT TO mendbay_portal USING (EXISTS (
  SELECT FROM terms_version v WHERE v.id = clause.terms_version_id AND v.published_at IS NOT NULL));
--> statement-breakpoint
-- A notice that was shown stays as it was shown; a correction has its own day.
CREATE TRIGGER law_notice_is_final BEFORE UPDATE OR DELETE ON law_notice FOR EACH ROW EXECUTE FUNCTION mendbay_refuse_change();
--> statement-breakpoint
GRANT SELECT ON sale_transfer, law_notice TO mendbay_portal;
