-- Links to set a password are used or withdrawn, requests for roles are decided; nothing else of them changes.
GRANT UPDATE (used_at, withdrawn_at) ON password_links TO wharfinger_app;
--> statement-breakpoint
GRANT UPDATE (outcome, decided_by, decided_by_name, decision_reason, decided_at, signature_id)
  ON role_requests TO wharfinger_app;
--> statement-breakpoint
DO $$
DECLARE
  name text;
BEGIN
  FOREACH name IN ARRAY ARRAY['password_links', 'role_requests']
  LOOP
    EXECUTE format('CREATE TRIGGER never_removed BEFORE DELETE ON %I FOR EACH ROW EXECUTE FUNCTION refuse_removal()', name);
    EXECUTE format('ALTER TABLE %I ENABLE ALWAYS TRIGGER never_removed', name);
    EXECUTE format('CREATE TRIGGER never_emptied BEFORE TRUNCATE ON %I FOR EACH STATEMENT EXECUTE FUNCTION refuse_removal()', name);
    EXECUTE format('ALTER TABLE %I ENABLE ALWAYS TRIGGER never_emptied', name);
  END LOOP;
END
$$;
--> statement-breakpoint

-- A link that was used or withdrawn never comes back to life, and none is used after its time.
CREATE FUNCTION check_password_link() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
DECLARE
  allowed password_links%ROWTYPE := OLD;
BEGIN
  IF OLD.used_at IS NULL AND OLD.withdrawn_at IS NULL THEN
    allowed.used_at := NEW.used_at;
    allowed.withdrawn_at := NEW.withdrawn_at;
  END IF;
  IF NEW IS DISTINCT FROM allowed THEN
    RAISE EXCEPTION 'a link to set a password is used or withdrawn once, and never changed' USING ERRCODE = 'restrict_violation';
  END IF;
  IF NEW.used_at IS DISTINCT FROM OLD.used_at AND OLD.expires_at <= clock_timestamp() THEN
    RAISE EXCEPTION 'this link to set a password has lapsed' USING ERRCODE = 'check_violation';
  END IF;
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER check_link BEFORE UPDATE ON password_links FOR EACH ROW EXECUTE FUNCTION check_password_link();
--> statement-breakpoint
ALTER TABLE password_links ENABLE ALWAYS TRIGGER check_link;
--> statement-breakpoint

-- A request is decided once, under the signature of the one who decided it.
CREATE FUNCTION check_role_request() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
BEGIN
  IF TG_OP = 'INSERT' THEN
    IF NEW.outcome IS NOT NULL THEN
      RAISE EXCEPTION 'a request for a role begins undecided' USING ERRCODE = 'check_violation';
    END IF;
    RETURN NEW;
  END IF;
  IF NEW IS DISTINCT FROM OLD AND OLD.outcome IS NOT NULL THEN
    RAISE EXCEPTION 'a decided request for a role does not change' USING ERRCODE = 'restrict_violation';
  END IF;
  IF NEW.outcome IS NOT NULL AND OLD.outcome IS NULL AND NOT EXISTS (SELECT FROM signatures
    WHERE id = NEW.signature_id AND record_type = 'role-request' AND record_id = NEW.id::text
      AND meaning = NEW.outcome AND signer_id = NEW.decided_by) THEN
    RAISE EXCEPTION 'a request for a role is decided under the signature of the one who decides' USING ERRCODE = 'check_violation';
  END IF;
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER check_request BEFORE INSERT OR UPDATE ON role_requests FOR EACH ROW EXECUTE FUNCTION check_role_request();
--> statement-breakpoint
ALTER TABLE role_requests ENABLE ALWAYS TRIGGER check_request;
