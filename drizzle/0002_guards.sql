-- What nobody may do, whatever the application's code says. Two walls: the application's role lacks the
-- privilege, and triggers stop the tables' owner as well. The triggers fire ALWAYS, so that
-- session_replication_role does not switch them off.

-- The application's role. scripts/migrate.ts gives it its password and the right to log in.
DO $$
BEGIN
  IF NOT EXISTS (SELECT FROM pg_roles WHERE rolname = 'wharfinger_app') THEN
    CREATE ROLE wharfinger_app NOLOGIN NOSUPERUSER NOCREATEDB NOCREATEROLE NOREPLICATION;
  END IF;
EXCEPTION WHEN duplicate_object OR unique_violation THEN
  NULL; -- another database of the same server made it at this moment
END
$$;
--> statement-breakpoint
REVOKE ALL ON SCHEMA public FROM PUBLIC;
--> statement-breakpoint
GRANT USAGE ON SCHEMA public TO wharfinger_app;
--> statement-breakpoint
GRANT SELECT, INSERT ON ALL TABLES IN SCHEMA public TO wharfinger_app;
--> statement-breakpoint
-- A later migration's table can be read and added to; changing it takes a grant of its own.
ALTER DEFAULT PRIVILEGES IN SCHEMA public GRANT SELECT, INSERT ON TABLES TO wharfinger_app;
--> statement-breakpoint
GRANT UPDATE ON sites, users, materials, suppliers, manufacturers, instruments, method_runs, challenge_sets,
  deviations, number_series, outbox_mails, saved_filters TO wharfinger_app;
--> statement-breakpoint
GRANT UPDATE (last_seen_at, revoked_at, revoked_why, failed_signatures) ON sessions TO wharfinger_app;
--> statement-breakpoint
GRANT UPDATE (last_used_at, revoked_at) ON api_tokens TO wharfinger_app;
--> statement-breakpoint
GRANT UPDATE (ended_at, ended_by, end_reason) ON role_grants TO wharfinger_app;
--> statement-breakpoint
GRANT UPDATE (withdrawn_at) ON approved_sources TO wharfinger_app;
--> statement-breakpoint
GRANT UPDATE (certificate, independent_identity, expires_on, quality, status, status_reason) ON reference_spectra TO wharfinger_app;
--> statement-breakpoint
GRANT UPDATE (status, definition, intended_use, change_reason, revision, bundle, bundle_sha256, submitted_at,
  author_signature_id, approver_id, approver_signature_id, effective_at, ended_at, end_reason)
  ON method_versions TO wharfinger_app;
--> statement-breakpoint
GRANT UPDATE (carrier, condition, status) ON deliveries TO wharfinger_app;
--> statement-breakpoint
GRANT UPDATE (status, method_version_id) ON lots TO wharfinger_app;
--> statement-breakpoint
GRANT UPDATE (status, condition) ON containers TO wharfinger_app;
--> statement-breakpoint
GRANT UPDATE (outcome, decided_by, decided_by_name, decision_reason, decided_at, signature_id, used_by_scan_id)
  ON repeat_requests TO wharfinger_app;
--> statement-breakpoint
GRANT DELETE ON method_version_references, saved_filters TO wharfinger_app;
--> statement-breakpoint

-- Append-only tables: no row changes or goes.
CREATE FUNCTION refuse_change() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
BEGIN
  RAISE EXCEPTION '% is append-only: % is refused', TG_TABLE_NAME, TG_OP USING ERRCODE = 'restrict_violation';
END
$$;
--> statement-breakpoint
DO $$
DECLARE
  name text;
BEGIN
  FOREACH name IN ARRAY ARRAY['trail_entries', 'trail_leaves', 'trail_nodes', 'tree_heads', 'trail_reviews', 'scans',
    'decisions', 'signatures', 'raw_files', 'certificates', 'dispositions', 'performance_checks', 'instrument_log',
    'lot_papers', 'limit_tests', 'deviation_notes', 'libraries', 'tolerance_sets', 'challenge_spectra',
    'caution_acknowledgements']
  LOOP
    EXECUTE format('CREATE TRIGGER append_only BEFORE UPDATE OR DELETE ON %I FOR EACH ROW EXECUTE FUNCTION refuse_change()', name);
    EXECUTE format('ALTER TABLE %I ENABLE ALWAYS TRIGGER append_only', name);
    EXECUTE format('CREATE TRIGGER never_emptied BEFORE TRUNCATE ON %I FOR EACH STATEMENT EXECUTE FUNCTION refuse_change()', name);
    EXECUTE format('ALTER TABLE %I ENABLE ALWAYS TRIGGER never_emptied', name);
  END LOOP;
END
$$;
--> statement-breakpoint

-- Records that change by rule, and never go.
CREATE FUNCTION refuse_removal() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
BEGIN
  RAISE EXCEPTION 'rows of % are never removed: % is refused', TG_TABLE_NAME, TG_OP USING ERRCODE = 'restrict_violation';
END
$$;
--> statement-breakpoint
DO $$
DECLARE
  name text;
BEGIN
  FOREACH name IN ARRAY ARRAY['sites', 'users', 'role_grants', 'api_tokens', 'deliveries', 'lots', 'containers', 'materials',
    'suppliers', 'manufacturers', 'approved_sources', 'reference_spectra', 'instruments', 'methods', 'method_versions',
    'method_runs', 'challenge_sets', 'repeat_requests', 'deviations', 'number_series']
  LOOP
    EXECUTE format('CREATE TRIGGER never_removed BEFORE DELETE ON %I FOR EACH ROW EXECUTE FUNCTION refuse_removal()', name);
    EXECUTE format('ALTER TABLE %I ENABLE ALWAYS TRIGGER never_removed', name);
    EXECUTE format('CREATE TRIGGER never_emptied BEFORE TRUNCATE ON %I FOR EACH STATEMENT EXECUTE FUNCTION refuse_removal()', name);
    EXECUTE format('ALTER TABLE %I ENABLE ALWAYS TRIGGER never_emptied', name);
  END LOOP;
END
$$;
--> statement-breakpoint

-- The trail: time, transaction, content and hash are the database's, whatever the writer says.
CREATE FUNCTION write_trail_entry() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
BEGIN
  IF btrim(NEW.actor_name) = '' OR btrim(NEW.action) = '' OR btrim(NEW.record_type) = '' THEN
    RAISE EXCEPTION 'a trail entry names who did what to which kind of record' USING ERRCODE = 'check_violation';
  END IF;
  NEW.xid := pg_current_xact_id();
  NEW.at := clock_timestamp();
  NEW.content := jsonb_build_object(
    'id', NEW.id, 'xid', NEW.xid::text,
    'at', to_char(NEW.at AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.US"Z"'),
    'actorId', NEW.actor_id, 'actorName', NEW.actor_name, 'actorRole', NEW.actor_role, 'action', NEW.action,
    'recordType', NEW.record_type, 'recordId', NEW.record_id, 'recordLabel', NEW.record_label, 'lotId', NEW.lot_id,
    'before', NEW.before, 'after', NEW.after, 'reason', NEW.reason, 'requestId', NEW.request_id)::text;
  NEW.content_hash := encode(sha256(convert_to(NEW.content, 'UTF8')), 'hex');
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER write_entry BEFORE INSERT ON trail_entries FOR EACH ROW EXECUTE FUNCTION write_trail_entry();
--> statement-breakpoint
ALTER TABLE trail_entries ENABLE ALWAYS TRIGGER write_entry;
--> statement-breakpoint

-- Leaves come in order, without a gap, each with the hash of its entry.
CREATE FUNCTION check_trail_leaf() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
DECLARE
  hash text;
BEGIN
  SELECT encode(sha256('\x00'::bytea || convert_to(content, 'UTF8')), 'hex') INTO hash FROM trail_entries WHERE id = NEW.entry_id;
  IF hash IS NULL OR hash <> NEW.leaf_hash THEN
    RAISE EXCEPTION 'leaf % is not the hash of entry %', NEW.leaf_index, NEW.entry_id USING ERRCODE = 'check_violation';
  END IF;
  IF NEW.leaf_index <> (SELECT coalesce(max(leaf_index) + 1, 0) FROM trail_leaves) THEN
    RAISE EXCEPTION 'leaf % does not follow the last one', NEW.leaf_index USING ERRCODE = 'check_violation';
  END IF;
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER check_leaf BEFORE INSERT ON trail_leaves FOR EACH ROW EXECUTE FUNCTION check_trail_leaf();
--> statement-breakpoint
ALTER TABLE trail_leaves ENABLE ALWAYS TRIGGER check_leaf;
--> statement-breakpoint

-- Nobody sets the time of a signature or of a disposition.
CREATE FUNCTION stamp_signature() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
BEGIN
  NEW.signed_at := clock_timestamp();
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER stamp BEFORE INSERT ON signatures FOR EACH ROW EXECUTE FUNCTION stamp_signature();
--> statement-breakpoint
ALTER TABLE signatures ENABLE ALWAYS TRIGGER stamp;
--> statement-breakpoint

-- Segregation of duties on the record: who scanned a lot does not decide it, and the signature is this lot's own.
CREATE FUNCTION check_disposition() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
DECLARE
  signature signatures%ROWTYPE;
BEGIN
  NEW.decided_at := clock_timestamp();
  SELECT * INTO signature FROM signatures WHERE id = NEW.signature_id;
  IF signature.record_type IS DISTINCT FROM 'lot' OR signature.record_id IS DISTINCT FROM NEW.lot_id::text THEN
    RAISE EXCEPTION 'the signature of this disposition is of another record' USING ERRCODE = 'check_violation';
  END IF;
  IF EXISTS (SELECT FROM dispositions WHERE signature_id = NEW.signature_id) THEN
    RAISE EXCEPTION 'the signature of this disposition was used before' USING ERRCODE = 'check_violation';
  END IF;
  IF EXISTS (SELECT FROM scans WHERE lot_id = NEW.lot_id AND operator_id = signature.signer_id) THEN
    RAISE EXCEPTION 'who scanned a container of a lot does not decide the lot' USING ERRCODE = 'check_violation';
  END IF;
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER check_disposition BEFORE INSERT ON dispositions FOR EACH ROW EXECUTE FUNCTION check_disposition();
--> statement-breakpoint
ALTER TABLE dispositions ENABLE ALWAYS TRIGGER check_disposition;
--> statement-breakpoint

-- A lot is released or rejected by a signed disposition of the same transaction, and by nothing else.
CREATE FUNCTION check_lot_status() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
DECLARE
  latest text;
BEGIN
  IF TG_OP = 'INSERT' THEN
    IF NEW.status IN ('released', 'rejected') THEN
      RAISE EXCEPTION 'a lot begins undecided' USING ERRCODE = 'check_violation';
    END IF;
    RETURN NULL;
  END IF;
  IF NEW.status = OLD.status OR (NEW.status NOT IN ('released', 'rejected') AND OLD.status NOT IN ('released', 'rejected')) THEN
    RETURN NULL;
  END IF;
  SELECT outcome INTO latest FROM dispositions
    WHERE lot_id = NEW.id AND decided_at >= transaction_timestamp() ORDER BY decided_at DESC LIMIT 1;
  IF latest IS DISTINCT FROM (CASE NEW.status WHEN 'released' THEN 'release' WHEN 'rejected' THEN 'reject' ELSE 'reopen' END) THEN
    RAISE EXCEPTION 'lot % goes from % to % only with a signed disposition', NEW.lot_number, OLD.status, NEW.status USING ERRCODE = 'check_violation';
  END IF;
  RETURN NULL;
END
$$;
--> statement-breakpoint
CREATE CONSTRAINT TRIGGER check_status AFTER INSERT OR UPDATE ON lots DEFERRABLE INITIALLY DEFERRED
  FOR EACH ROW EXECUTE FUNCTION check_lot_status();
--> statement-breakpoint
ALTER TABLE lots ENABLE ALWAYS TRIGGER check_status;
--> statement-breakpoint

-- A decided lot takes no more scans. The lot is locked, so that a decision under way is waited for.
CREATE FUNCTION check_scan() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
DECLARE
  lot_status text;
BEGIN
  SELECT status INTO lot_status FROM lots WHERE id = NEW.lot_id FOR NO KEY UPDATE;
  IF lot_status IN ('released', 'rejected') THEN
    RAISE EXCEPTION 'the lot is % already', lot_status USING ERRCODE = 'check_violation';
  END IF;
  IF NOT EXISTS (SELECT FROM containers WHERE id = NEW.container_id AND lot_id = NEW.lot_id) THEN
    RAISE EXCEPTION 'the container is not of this lot' USING ERRCODE = 'check_violation';
  END IF;
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER check_scan BEFORE INSERT ON scans FOR EACH ROW EXECUTE FUNCTION check_scan();
--> statement-breakpoint
ALTER TABLE scans ENABLE ALWAYS TRIGGER check_scan;
--> statement-breakpoint

-- Method versions: begin as drafts, go to review under the author's signature, become effective under another
-- person's, and from then on only end.
CREATE FUNCTION check_method_version() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
DECLARE
  allowed method_versions%ROWTYPE;
BEGIN
  IF TG_OP = 'INSERT' THEN
    IF NEW.status <> 'draft' THEN
      RAISE EXCEPTION 'a method version begins as a draft' USING ERRCODE = 'check_violation';
    END IF;
    RETURN NEW;
  END IF;
  IF (NEW.id, NEW.method_id, NEW.version, NEW.author_id, NEW.author_name, NEW.created_at)
    IS DISTINCT FROM (OLD.id, OLD.method_id, OLD.version, OLD.author_id, OLD.author_name, OLD.created_at) THEN
    RAISE EXCEPTION 'number, author and date of a method version never change' USING ERRCODE = 'restrict_violation';
  END IF;
  IF NEW.status <> OLD.status AND NOT ((OLD.status, NEW.status) IN (('draft', 'in_review'), ('draft', 'withdrawn'),
    ('in_review', 'draft'), ('in_review', 'effective'), ('in_review', 'withdrawn'), ('effective', 'superseded'),
    ('effective', 'withdrawn'), ('superseded', 'withdrawn'))) THEN
    RAISE EXCEPTION 'a method version does not go from % to %', OLD.status, NEW.status USING ERRCODE = 'restrict_violation';
  END IF;
  IF OLD.status IN ('effective', 'superseded', 'withdrawn') THEN
    allowed := OLD;
    IF NEW.status <> OLD.status THEN
      allowed.status := NEW.status;
      allowed.ended_at := NEW.ended_at;
      allowed.end_reason := NEW.end_reason;
    END IF;
    IF NEW IS DISTINCT FROM allowed THEN
      RAISE EXCEPTION 'a method version that has been effective never changes' USING ERRCODE = 'restrict_violation';
    END IF;
  END IF;
  IF OLD.status = 'in_review' AND NEW.status <> 'draft' AND
    (NEW.definition, NEW.intended_use, NEW.change_reason, NEW.bundle, NEW.bundle_sha256, NEW.author_signature_id)
    IS DISTINCT FROM (OLD.definition, OLD.intended_use, OLD.change_reason, OLD.bundle, OLD.bundle_sha256, OLD.author_signature_id) THEN
    RAISE EXCEPTION 'a method version in review does not change; return it to its author' USING ERRCODE = 'restrict_violation';
  END IF;
  IF OLD.status = 'draft' AND NEW.status = 'in_review' AND NOT EXISTS (SELECT FROM signatures
    WHERE id = NEW.author_signature_id AND record_type = 'method-version' AND record_id = NEW.id::text
      AND meaning = 'authored' AND signer_id = NEW.author_id) THEN
    RAISE EXCEPTION 'a method version goes to review under its author''s signature' USING ERRCODE = 'check_violation';
  END IF;
  IF OLD.status = 'in_review' AND NEW.status = 'effective' AND NOT EXISTS (SELECT FROM signatures
    WHERE id = NEW.approver_signature_id AND record_type = 'method-version' AND record_id = NEW.id::text
      AND meaning = 'approved' AND signer_id = NEW.approver_id AND signer_id <> NEW.author_id) THEN
    RAISE EXCEPTION 'a method version becomes effective under another person''s signature' USING ERRCODE = 'check_violation';
  END IF;
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER check_version BEFORE INSERT OR UPDATE ON method_versions FOR EACH ROW EXECUTE FUNCTION check_method_version();
--> statement-breakpoint
ALTER TABLE method_versions ENABLE ALWAYS TRIGGER check_version;
--> statement-breakpoint

-- What a version is built on is settled once it is no draft.
CREATE FUNCTION check_version_reference() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
DECLARE
  version_id uuid := CASE TG_OP WHEN 'DELETE' THEN OLD.method_version_id ELSE NEW.method_version_id END;
BEGIN
  IF TG_OP = 'UPDATE' OR (SELECT status FROM method_versions WHERE id = version_id FOR SHARE) <> 'draft' THEN
    RAISE EXCEPTION 'the references of a method version change only while it is a draft' USING ERRCODE = 'restrict_violation';
  END IF;
  RETURN CASE TG_OP WHEN 'DELETE' THEN OLD ELSE NEW END;
END
$$;
--> statement-breakpoint
CREATE TRIGGER check_reference BEFORE INSERT OR UPDATE OR DELETE ON method_version_references
  FOR EACH ROW EXECUTE FUNCTION check_version_reference();
--> statement-breakpoint
ALTER TABLE method_version_references ENABLE ALWAYS TRIGGER check_reference;
--> statement-breakpoint
CREATE TRIGGER never_emptied BEFORE TRUNCATE ON method_version_references FOR EACH STATEMENT EXECUTE FUNCTION refuse_removal();
--> statement-breakpoint
ALTER TABLE method_version_references ENABLE ALWAYS TRIGGER never_emptied;
--> statement-breakpoint

-- A reference's spectrum and provenance never change; while a version under review or in force stands on it,
-- nothing of it does.
CREATE FUNCTION check_reference_spectrum() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
BEGIN
  IF (NEW.id, NEW.number, NEW.material_id, NEW.raw_file_id, NEW.kind, NEW.source_lot, NEW.instrument_id, NEW.excitation_nm, NEW.added_by, NEW.added_at)
    IS DISTINCT FROM (OLD.id, OLD.number, OLD.material_id, OLD.raw_file_id, OLD.kind, OLD.source_lot, OLD.instrument_id, OLD.excitation_nm, OLD.added_by, OLD.added_at) THEN
    RAISE EXCEPTION 'spectrum and provenance of a reference never change' USING ERRCODE = 'restrict_violation';
  END IF;
  IF NEW IS DISTINCT FROM OLD AND EXISTS (SELECT FROM method_version_references r JOIN method_versions v ON v.id = r.method_version_id
    WHERE r.reference_id = OLD.id AND v.status IN ('in_review', 'effective')) THEN
    RAISE EXCEPTION 'reference % is used by a method version in review or in force', OLD.number USING ERRCODE = 'restrict_violation';
  END IF;
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER check_reference BEFORE UPDATE ON reference_spectra FOR EACH ROW EXECUTE FUNCTION check_reference_spectrum();
--> statement-breakpoint
ALTER TABLE reference_spectra ENABLE ALWAYS TRIGGER check_reference;
--> statement-breakpoint

-- Accounts keep their names; grants only end.
CREATE FUNCTION check_user() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
BEGIN
  IF (NEW.id, NEW.user_name, NEW.person_id, NEW.created_at) IS DISTINCT FROM (OLD.id, OLD.user_name, OLD.person_id, OLD.created_at) THEN
    RAISE EXCEPTION 'user name and person of an account never change' USING ERRCODE = 'restrict_violation';
  END IF;
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER check_user BEFORE UPDATE ON users FOR EACH ROW EXECUTE FUNCTION check_user();
--> statement-breakpoint
ALTER TABLE users ENABLE ALWAYS TRIGGER check_user;
--> statement-breakpoint
CREATE FUNCTION check_role_grant() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
DECLARE
  allowed role_grants%ROWTYPE := OLD;
BEGIN
  IF OLD.ended_at IS NULL THEN
    allowed.ended_at := NEW.ended_at;
    allowed.ended_by := NEW.ended_by;
    allowed.end_reason := NEW.end_reason;
  END IF;
  IF NEW IS DISTINCT FROM allowed THEN
    RAISE EXCEPTION 'a grant of a role is never edited, only ended, once' USING ERRCODE = 'restrict_violation';
  END IF;
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER check_grant BEFORE UPDATE ON role_grants FOR EACH ROW EXECUTE FUNCTION check_role_grant();
--> statement-breakpoint
ALTER TABLE role_grants ENABLE ALWAYS TRIGGER check_grant;
--> statement-breakpoint

-- What is concluded stays so.
CREATE FUNCTION check_deviation() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
BEGIN
  IF OLD.phase = 'closed' AND NEW IS DISTINCT FROM OLD THEN
    RAISE EXCEPTION 'deviation % is closed and does not change', OLD.number USING ERRCODE = 'restrict_violation';
  END IF;
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER check_deviation BEFORE UPDATE ON deviations FOR EACH ROW EXECUTE FUNCTION check_deviation();
--> statement-breakpoint
ALTER TABLE deviations ENABLE ALWAYS TRIGGER check_deviation;
--> statement-breakpoint
CREATE FUNCTION check_repeat_request() RETURNS trigger LANGUAGE plpgsql SET search_path = pg_catalog, public, pg_temp AS $$
DECLARE
  allowed repeat_requests%ROWTYPE := OLD;
BEGIN
  IF OLD.outcome IS NOT NULL THEN
    IF OLD.outcome = 'granted' AND OLD.used_by_scan_id IS NULL THEN
      allowed.used_by_scan_id := NEW.used_by_scan_id;
    END IF;
    IF NEW IS DISTINCT FROM allowed THEN
      RAISE EXCEPTION 'a decided request for a repeat does not change, and its grant is used once' USING ERRCODE = 'restrict_violation';
    END IF;
  END IF;
  RETURN NEW;
END
$$;
--> statement-breakpoint
CREATE TRIGGER check_request BEFORE UPDATE ON repeat_requests FOR EACH ROW EXECUTE FUNCTION check_repeat_request();
--> statement-breakpoint
ALTER TABLE repeat_requests ENABLE ALWAYS TRIGGER check_request;
