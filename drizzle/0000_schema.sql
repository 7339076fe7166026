CREATE TABLE "instrument_log" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"instrument_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"entry" text NOT NULL,
	"by_user_id" uuid,
	"by_name" text NOT NULL,
	"at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "instruments" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"site_id" uuid NOT NULL,
	"name" text NOT NULL,
	"serial" text NOT NULL,
	"model" text DEFAULT '' NOT NULL,
	"firmware" text DEFAULT '' NOT NULL,
	"excitation_nm" double precision NOT NULL,
	"range_from_cm1" double precision NOT NULL,
	"range_to_cm1" double precision NOT NULL,
	"resolution_cm1" double precision NOT NULL,
	"location" text NOT NULL,
	"status" text DEFAULT 'in_service' NOT NULL,
	"next_qualification_on" date,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "instruments_name_unique" UNIQUE("name"),
	CONSTRAINT "instruments_serial_unique" UNIQUE("serial"),
	CONSTRAINT "instruments_excitation_sane" CHECK ("instruments"."excitation_nm" between 200 and 2000),
	CONSTRAINT "instruments_range_ascends" CHECK ("instruments"."range_from_cm1" < "instruments"."range_to_cm1")
);
--> statement-breakpoint
CREATE TABLE "performance_checks" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"instrument_id" uuid NOT NULL,
	"standard" text NOT NULL,
	"standard_lot" text DEFAULT '' NOT NULL,
	"tolerance_set_id" uuid,
	"raw_file_id" uuid NOT NULL,
	"result" jsonb NOT NULL,
	"axis_shift_cm1" double precision,
	"axis_scale" double precision,
	"passed" boolean NOT NULL,
	"performed_by" uuid NOT NULL,
	"performed_by_name" text NOT NULL,
	"performed_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"valid_until" timestamp with time zone,
	CONSTRAINT "performance_checks_valid_if_passed" CHECK ("performance_checks"."passed" = ("performance_checks"."valid_until" is not null))
);
--> statement-breakpoint
CREATE TABLE "tolerance_sets" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"version" integer NOT NULL,
	"standard" text NOT NULL,
	"bands" jsonb NOT NULL,
	"source" text NOT NULL,
	"effective_from" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"approved_by" uuid
);
--> statement-breakpoint
CREATE TABLE "approved_sources" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"material_id" uuid NOT NULL,
	"supplier_id" uuid NOT NULL,
	"manufacturer_id" uuid NOT NULL,
	"approved_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"withdrawn_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "manufacturers" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"country" text DEFAULT '' NOT NULL,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "manufacturers_code_unique" UNIQUE("code")
);
--> statement-breakpoint
CREATE TABLE "materials" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"item_code" text NOT NULL,
	"name" text NOT NULL,
	"cas_number" text,
	"grade" text DEFAULT '' NOT NULL,
	"raman_suitability" text DEFAULT 'suitable' NOT NULL,
	"suitability_reason" text,
	"dark" boolean DEFAULT false NOT NULL,
	"energetic" boolean DEFAULT false NOT NULL,
	"light_sensitive" boolean DEFAULT false NOT NULL,
	"deg_eg_high_risk" boolean DEFAULT false NOT NULL,
	"packaging" text[] DEFAULT '{}' NOT NULL,
	"status" text DEFAULT 'active' NOT NULL,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"created_by" uuid,
	CONSTRAINT "materials_itemCode_unique" UNIQUE("item_code"),
	CONSTRAINT "materials_unsuitable_explained" CHECK ("materials"."raman_suitability" = 'suitable' or length("materials"."suitability_reason") > 0)
);
--> statement-breakpoint
CREATE TABLE "reference_spectra" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"number" text NOT NULL,
	"material_id" uuid NOT NULL,
	"raw_file_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"source_lot" text NOT NULL,
	"certificate" text DEFAULT '' NOT NULL,
	"independent_identity" text DEFAULT '' NOT NULL,
	"instrument_id" uuid,
	"excitation_nm" text NOT NULL,
	"expires_on" date,
	"quality" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"status" text DEFAULT 'draft' NOT NULL,
	"status_reason" text,
	"added_by" uuid,
	"added_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "reference_spectra_number_unique" UNIQUE("number")
);
--> statement-breakpoint
CREATE TABLE "suppliers" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "suppliers_code_unique" UNIQUE("code")
);
--> statement-breakpoint
CREATE TABLE "challenge_sets" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"material_id" uuid,
	"curator_id" uuid,
	"uses" integer DEFAULT 0 NOT NULL,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "challenge_sets_name_unique" UNIQUE("name")
);
--> statement-breakpoint
CREATE TABLE "challenge_spectra" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"set_id" uuid NOT NULL,
	"material_id" uuid,
	"source_lot" text NOT NULL,
	"raw_file_id" uuid NOT NULL
);
--> statement-breakpoint
CREATE TABLE "libraries" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"sha256" text NOT NULL,
	"content" "bytea" NOT NULL,
	"entry_count" integer NOT NULL,
	"made_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "method_runs" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"method_version_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"status" text DEFAULT 'waiting' NOT NULL,
	"done" integer DEFAULT 0 NOT NULL,
	"total" integer DEFAULT 0 NOT NULL,
	"bundle_sha256" text,
	"evidence" jsonb,
	"acknowledgement_signature_id" uuid,
	"requested_by" uuid,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"finished_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "method_version_references" (
	"method_version_id" uuid NOT NULL,
	"reference_id" uuid NOT NULL,
	CONSTRAINT "method_version_references_method_version_id_reference_id_pk" PRIMARY KEY("method_version_id","reference_id")
);
--> statement-breakpoint
CREATE TABLE "method_versions" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"method_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"status" text DEFAULT 'draft' NOT NULL,
	"definition" jsonb NOT NULL,
	"intended_use" text DEFAULT '' NOT NULL,
	"change_reason" text DEFAULT '' NOT NULL,
	"revision" integer DEFAULT 1 NOT NULL,
	"bundle" "bytea",
	"bundle_sha256" text,
	"author_id" uuid NOT NULL,
	"author_name" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"submitted_at" timestamp with time zone,
	"author_signature_id" uuid,
	"approver_id" uuid,
	"approver_signature_id" uuid,
	"effective_at" timestamp with time zone,
	"ended_at" timestamp with time zone,
	"end_reason" text,
	CONSTRAINT "method_versions_four_eyes" CHECK ("method_versions"."approver_id" is null or "method_versions"."approver_id" <> "method_versions"."author_id"),
	CONSTRAINT "method_versions_effective_whole" CHECK ("method_versions"."status" not in ('effective','superseded') or ("method_versions"."bundle" is not null and "method_versions"."bundle_sha256" is not null and "method_versions"."effective_at" is not null and "method_versions"."approver_id" is not null))
);
--> statement-breakpoint
CREATE TABLE "methods" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"material_id" uuid NOT NULL,
	"code" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "methods_materialId_unique" UNIQUE("material_id"),
	CONSTRAINT "methods_code_unique" UNIQUE("code")
);
--> statement-breakpoint
CREATE TABLE "api_tokens" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"token_hash" text NOT NULL,
	"scopes" text[] NOT NULL,
	"instrument_id" uuid,
	"owner_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"last_used_at" timestamp with time zone,
	"revoked_at" timestamp with time zone,
	CONSTRAINT "api_tokens_tokenHash_unique" UNIQUE("token_hash")
);
--> statement-breakpoint
CREATE TABLE "caution_acknowledgements" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"user_id" uuid NOT NULL,
	"caution" text NOT NULL,
	"acknowledged_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "role_grants" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"user_id" uuid NOT NULL,
	"role" text NOT NULL,
	"requested_by" uuid,
	"granted_by" uuid,
	"reason" text NOT NULL,
	"granted_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"ended_at" timestamp with time zone,
	"ended_by" uuid,
	"end_reason" text,
	CONSTRAINT "role_grants_role_known" CHECK ("role_grants"."role" in ('operator','method_owner','approver','auditor','administrator')),
	CONSTRAINT "role_grants_not_own" CHECK ("role_grants"."granted_by" is null or "role_grants"."granted_by" <> "role_grants"."user_id"),
	CONSTRAINT "role_grants_end_reasoned" CHECK (("role_grants"."ended_at" is null) = ("role_grants"."end_reason" is null))
);
--> statement-breakpoint
CREATE TABLE "sessions" (
	"token_hash" text PRIMARY KEY NOT NULL,
	"user_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"last_seen_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"revoked_at" timestamp with time zone,
	"revoked_why" text,
	"address" text,
	"user_agent" text,
	"failed_signatures" integer DEFAULT 0 NOT NULL
);
--> statement-breakpoint
CREATE TABLE "sites" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"dock" text NOT NULL,
	"time_zone" text NOT NULL,
	"invalid_repeat_limit" integer DEFAULT 3 NOT NULL,
	"check_valid_hours" integer DEFAULT 24 NOT NULL,
	"reduced_sampling_allowed" boolean DEFAULT false NOT NULL,
	"demo" boolean DEFAULT false NOT NULL,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "sites_code_unique" UNIQUE("code")
);
--> statement-breakpoint
CREATE TABLE "users" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"site_id" uuid NOT NULL,
	"user_name" text NOT NULL,
	"person_id" text NOT NULL,
	"printed_name" text NOT NULL,
	"email" text NOT NULL,
	"password_hash" text,
	"status" text DEFAULT 'active' NOT NULL,
	"proofed_at" timestamp with time zone,
	"proofed_by" text,
	"statement_accepted_at" timestamp with time zone,
	"failed_attempts" integer DEFAULT 0 NOT NULL,
	"locked_until" timestamp with time zone,
	"one_time_code_secret" text,
	"one_time_code_last_step" integer,
	"preferences" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "users_personId_unique" UNIQUE("person_id"),
	CONSTRAINT "users_status_known" CHECK ("users"."status" in ('active', 'locked', 'suspended', 'left'))
);
--> statement-breakpoint
CREATE TABLE "raw_files" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"sha256" text NOT NULL,
	"bytes" "bytea" NOT NULL,
	"size" integer NOT NULL,
	"file_name" text NOT NULL,
	"media_type" text NOT NULL,
	"received_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "raw_files_hash_true" CHECK ("raw_files"."sha256" = encode(sha256("raw_files"."bytes"), 'hex')),
	CONSTRAINT "raw_files_size_true" CHECK ("raw_files"."size" = octet_length("raw_files"."bytes"))
);
--> statement-breakpoint
CREATE TABLE "containers" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"lot_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"barcode" text NOT NULL,
	"packaging" text DEFAULT 'drum' NOT NULL,
	"status" text DEFAULT 'awaiting' NOT NULL,
	"condition" text DEFAULT 'sound' NOT NULL,
	"in_plan" text DEFAULT 'yes' NOT NULL,
	CONSTRAINT "containers_barcode_unique" UNIQUE("barcode"),
	CONSTRAINT "containers_number_positive" CHECK ("containers"."number" > 0)
);
--> statement-breakpoint
CREATE TABLE "deliveries" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"site_id" uuid NOT NULL,
	"number" text NOT NULL,
	"delivery_note" text NOT NULL,
	"supplier_id" uuid NOT NULL,
	"carrier" text DEFAULT '' NOT NULL,
	"condition" text DEFAULT '' NOT NULL,
	"status" text DEFAULT 'landed' NOT NULL,
	"arrived_on" date NOT NULL,
	"received_by" uuid NOT NULL,
	"received_by_name" text NOT NULL,
	"received_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "deliveries_number_unique" UNIQUE("number")
);
--> statement-breakpoint
CREATE TABLE "limit_tests" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"lot_id" uuid NOT NULL,
	"outcome" text NOT NULL,
	"report_number" text NOT NULL,
	"recorded_by" uuid NOT NULL,
	"recorded_by_name" text NOT NULL,
	"recorded_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "lot_papers" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"lot_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"raw_file_id" uuid NOT NULL,
	"note" text DEFAULT '' NOT NULL,
	"added_by" uuid NOT NULL,
	"added_by_name" text NOT NULL,
	"added_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "lots" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"lot_number" text NOT NULL,
	"delivery_id" uuid NOT NULL,
	"material_id" uuid NOT NULL,
	"manufacturer_id" uuid NOT NULL,
	"manufacturer_batch" text NOT NULL,
	"expires_on" date,
	"retest_on" date,
	"container_count" integer NOT NULL,
	"sampling_plan" text DEFAULT 'every_container' NOT NULL,
	"sampling_reason" text,
	"status" text DEFAULT 'quarantine' NOT NULL,
	"method_version_id" uuid,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "lots_lotNumber_unique" UNIQUE("lot_number"),
	CONSTRAINT "lots_count_sane" CHECK ("lots"."container_count" between 1 and 2000),
	CONSTRAINT "lots_reduced_plan_reasoned" CHECK ("lots"."sampling_plan" = 'every_container' or length("lots"."sampling_reason") > 0)
);
--> statement-breakpoint
CREATE TABLE "certificates" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"number" text NOT NULL,
	"lot_id" uuid NOT NULL,
	"disposition_id" uuid NOT NULL,
	"verification_code" text NOT NULL,
	"pdf" "bytea" NOT NULL,
	"sha256" text NOT NULL,
	"tree_size" integer NOT NULL,
	"tree_root" text NOT NULL,
	"issued_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "certificates_number_unique" UNIQUE("number"),
	CONSTRAINT "certificates_dispositionId_unique" UNIQUE("disposition_id"),
	CONSTRAINT "certificates_verificationCode_unique" UNIQUE("verification_code"),
	CONSTRAINT "certificates_hash_true" CHECK ("certificates"."sha256" = encode(sha256("certificates"."pdf"), 'hex'))
);
--> statement-breakpoint
CREATE TABLE "deviation_notes" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"deviation_id" uuid NOT NULL,
	"note" text NOT NULL,
	"evidence" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"by_user_id" uuid,
	"by_name" text NOT NULL,
	"at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "deviations" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"number" text NOT NULL,
	"title" text NOT NULL,
	"origin" text NOT NULL,
	"lot_id" uuid,
	"container_id" uuid,
	"scan_id" uuid,
	"phase" text DEFAULT 'assess' NOT NULL,
	"assignee_id" uuid,
	"due_on" date,
	"description" text DEFAULT '' NOT NULL,
	"cause_category" text,
	"cause" text,
	"impact" text,
	"action" text,
	"opened_by" uuid,
	"opened_by_name" text NOT NULL,
	"opened_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"closed_at" timestamp with time zone,
	"conclusion_signature_id" uuid,
	CONSTRAINT "deviations_number_unique" UNIQUE("number"),
	CONSTRAINT "deviations_closed_signed" CHECK (("deviations"."phase" = 'closed') = ("deviations"."closed_at" is not null and "deviations"."conclusion_signature_id" is not null)),
	CONSTRAINT "deviations_closed_reasoned" CHECK ("deviations"."phase" <> 'closed' or ("deviations"."cause_category" is not null and length("deviations"."cause") > 0 and length("deviations"."impact") > 0 and length("deviations"."action") > 0))
);
--> statement-breakpoint
CREATE TABLE "dispositions" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"lot_id" uuid NOT NULL,
	"outcome" text NOT NULL,
	"reason" text NOT NULL,
	"rejected_container_ids" uuid[] DEFAULT '{}' NOT NULL,
	"signature_id" uuid NOT NULL,
	"decided_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "number_series" (
	"series" text PRIMARY KEY NOT NULL,
	"last" integer NOT NULL
);
--> statement-breakpoint
CREATE TABLE "decisions" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"scan_id" uuid NOT NULL,
	"verdict" text NOT NULL,
	"near_limit" boolean NOT NULL,
	"engine_version" text NOT NULL,
	"library_id" uuid NOT NULL,
	"axis_shift_cm1" double precision,
	"axis_scale" double precision,
	"check_state" text NOT NULL,
	"correlation" double precision,
	"hotelling_t_2" double precision,
	"t2_limit" double precision,
	"q_residual" double precision,
	"q_limit" double precision,
	"best_rival_correlation" double precision,
	"signal_to_noise" double precision,
	"result" "bytea" NOT NULL,
	"result_sha256" text NOT NULL,
	"decided_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "decisions_scanId_unique" UNIQUE("scan_id"),
	CONSTRAINT "decisions_hash_true" CHECK ("decisions"."result_sha256" = encode(sha256("decisions"."result"), 'hex'))
);
--> statement-breakpoint
CREATE TABLE "repeat_requests" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"container_id" uuid NOT NULL,
	"scan_id" uuid NOT NULL,
	"cause" text NOT NULL,
	"reason" text NOT NULL,
	"requested_by" uuid NOT NULL,
	"requested_by_name" text NOT NULL,
	"requested_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"outcome" text,
	"decided_by" uuid,
	"decided_by_name" text,
	"decision_reason" text,
	"decided_at" timestamp with time zone,
	"signature_id" uuid,
	"used_by_scan_id" uuid,
	CONSTRAINT "repeat_requests_not_own" CHECK ("repeat_requests"."decided_by" is null or "repeat_requests"."decided_by" <> "repeat_requests"."requested_by"),
	CONSTRAINT "repeat_requests_whole" CHECK (("repeat_requests"."outcome" is null) = ("repeat_requests"."decided_by" is null))
);
--> statement-breakpoint
CREATE TABLE "scans" (
	"id" uuid PRIMARY KEY NOT NULL,
	"lot_id" uuid NOT NULL,
	"container_id" uuid NOT NULL,
	"attempt" integer NOT NULL,
	"instrument_id" uuid NOT NULL,
	"performance_check_id" uuid,
	"method_version_id" uuid NOT NULL,
	"raw_file_id" uuid NOT NULL,
	"read_options" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"acquisition" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"repeat_reason" text,
	"repeat_grant_id" uuid,
	"operator_id" uuid NOT NULL,
	"operator_name" text NOT NULL,
	"client_time" timestamp with time zone,
	"sent_late" boolean DEFAULT false NOT NULL,
	"recorded_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "scans_attempt_positive" CHECK ("scans"."attempt" > 0),
	CONSTRAINT "scans_repeat_reasoned" CHECK ("scans"."attempt" = 1 or length("scans"."repeat_reason") > 0)
);
--> statement-breakpoint
CREATE TABLE "signatures" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"signer_id" uuid NOT NULL,
	"printed_name" text NOT NULL,
	"role" text NOT NULL,
	"meaning" text NOT NULL,
	"reason" text DEFAULT '' NOT NULL,
	"record_type" text NOT NULL,
	"record_id" text NOT NULL,
	"record" "bytea" NOT NULL,
	"record_sha256" text NOT NULL,
	"signed_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "signatures_hash_true" CHECK ("signatures"."record_sha256" = encode(sha256("signatures"."record"), 'hex'))
);
--> statement-breakpoint
CREATE TABLE "outbox_mails" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"to_user_id" uuid,
	"to_address" text NOT NULL,
	"kind" text NOT NULL,
	"subject" text NOT NULL,
	"body" text NOT NULL,
	"status" text DEFAULT 'waiting' NOT NULL,
	"attempts" integer DEFAULT 0 NOT NULL,
	"last_error" text,
	"next_attempt_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"sent_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "saved_filters" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"user_id" uuid NOT NULL,
	"page" text NOT NULL,
	"name" text NOT NULL,
	"query" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "trail_entries" (
	"id" bigint PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "trail_entries_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 9223372036854775807 START WITH 1 CACHE 1),
	"xid" "xid8" DEFAULT pg_current_xact_id() NOT NULL,
	"at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"actor_id" uuid,
	"actor_name" text NOT NULL,
	"actor_role" text NOT NULL,
	"action" text NOT NULL,
	"record_type" text NOT NULL,
	"record_id" text NOT NULL,
	"record_label" text NOT NULL,
	"lot_id" uuid,
	"before" jsonb,
	"after" jsonb,
	"reason" text,
	"request_id" text,
	"content" text DEFAULT '' NOT NULL,
	"content_hash" text DEFAULT '' NOT NULL
);
--> statement-breakpoint
CREATE TABLE "trail_leaves" (
	"leaf_index" bigint PRIMARY KEY NOT NULL,
	"entry_id" bigint NOT NULL,
	"leaf_hash" text NOT NULL,
	"sealed_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	CONSTRAINT "trail_leaves_entryId_unique" UNIQUE("entry_id")
);
--> statement-breakpoint
CREATE TABLE "trail_nodes" (
	"level" integer NOT NULL,
	"node_index" bigint NOT NULL,
	"hash" text NOT NULL,
	CONSTRAINT "trail_nodes_level_node_index_pk" PRIMARY KEY("level","node_index")
);
--> statement-breakpoint
CREATE TABLE "trail_reviews" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"from_size" bigint NOT NULL,
	"to_size" bigint NOT NULL,
	"scope" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"findings" text NOT NULL,
	"signature_id" uuid NOT NULL,
	"reviewed_by" uuid NOT NULL,
	"reviewed_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "tree_heads" (
	"size" bigint PRIMARY KEY NOT NULL,
	"root_hash" text NOT NULL,
	"at" timestamp with time zone NOT NULL,
	"key_id" text NOT NULL,
	"signature" text NOT NULL
);
--> statement-breakpoint
ALTER TABLE "instrument_log" ADD CONSTRAINT "instrument_log_instrument_id_instruments_id_fk" FOREIGN KEY ("instrument_id") REFERENCES "public"."instruments"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "instrument_log" ADD CONSTRAINT "instrument_log_by_user_id_users_id_fk" FOREIGN KEY ("by_user_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "instruments" ADD CONSTRAINT "instruments_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "performance_checks" ADD CONSTRAINT "performance_checks_instrument_id_instruments_id_fk" FOREIGN KEY ("instrument_id") REFERENCES "public"."instruments"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "performance_checks" ADD CONSTRAINT "performance_checks_tolerance_set_id_tolerance_sets_id_fk" FOREIGN KEY ("tolerance_set_id") REFERENCES "public"."tolerance_sets"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "performance_checks" ADD CONSTRAINT "performance_checks_raw_file_id_raw_files_id_fk" FOREIGN KEY ("raw_file_id") REFERENCES "public"."raw_files"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "performance_checks" ADD CONSTRAINT "performance_checks_performed_by_users_id_fk" FOREIGN KEY ("performed_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "tolerance_sets" ADD CONSTRAINT "tolerance_sets_approved_by_users_id_fk" FOREIGN KEY ("approved_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "approved_sources" ADD CONSTRAINT "approved_sources_material_id_materials_id_fk" FOREIGN KEY ("material_id") REFERENCES "public"."materials"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "approved_sources" ADD CONSTRAINT "approved_sources_supplier_id_suppliers_id_fk" FOREIGN KEY ("supplier_id") REFERENCES "public"."suppliers"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "approved_sources" ADD CONSTRAINT "approved_sources_manufacturer_id_manufacturers_id_fk" FOREIGN KEY ("manufacturer_id") REFERENCES "public"."manufacturers"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "materials" ADD CONSTRAINT "materials_created_by_users_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reference_spectra" ADD CONSTRAINT "reference_spectra_material_id_materials_id_fk" FOREIGN KEY ("material_id") REFERENCES "public"."materials"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reference_spectra" ADD CONSTRAINT "reference_spectra_raw_file_id_raw_files_id_fk" FOREIGN KEY ("raw_file_id") REFERENCES "public"."raw_files"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reference_spectra" ADD CONSTRAINT "reference_spectra_instrument_id_instruments_id_fk" FOREIGN KEY ("instrument_id") REFERENCES "public"."instruments"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reference_spectra" ADD CONSTRAINT "reference_spectra_added_by_users_id_fk" FOREIGN KEY ("added_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "challenge_sets" ADD CONSTRAINT "challenge_sets_material_id_materials_id_fk" FOREIGN KEY ("material_id") REFERENCES "public"."materials"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "challenge_sets" ADD CONSTRAINT "challenge_sets_curator_id_users_id_fk" FOREIGN KEY ("curator_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "challenge_spectra" ADD CONSTRAINT "challenge_spectra_set_id_challenge_sets_id_fk" FOREIGN KEY ("set_id") REFERENCES "public"."challenge_sets"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "challenge_spectra" ADD CONSTRAINT "challenge_spectra_material_id_materials_id_fk" FOREIGN KEY ("material_id") REFERENCES "public"."materials"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "challenge_spectra" ADD CONSTRAINT "challenge_spectra_raw_file_id_raw_files_id_fk" FOREIGN KEY ("raw_file_id") REFERENCES "public"."raw_files"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "method_runs" ADD CONSTRAINT "method_runs_method_version_id_method_versions_id_fk" FOREIGN KEY ("method_version_id") REFERENCES "public"."method_versions"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "method_runs" ADD CONSTRAINT "method_runs_acknowledgement_signature_id_signatures_id_fk" FOREIGN KEY ("acknowledgement_signature_id") REFERENCES "public"."signatures"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "method_runs" ADD CONSTRAINT "method_runs_requested_by_users_id_fk" FOREIGN KEY ("requested_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "method_version_references" ADD CONSTRAINT "method_version_references_method_version_id_method_versions_id_fk" FOREIGN KEY ("method_version_id") REFERENCES "public"."method_versions"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "method_version_references" ADD CONSTRAINT "method_version_references_reference_id_reference_spectra_id_fk" FOREIGN KEY ("reference_id") REFERENCES "public"."reference_spectra"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "method_versions" ADD CONSTRAINT "method_versions_method_id_methods_id_fk" FOREIGN KEY ("method_id") REFERENCES "public"."methods"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "method_versions" ADD CONSTRAINT "method_versions_author_id_users_id_fk" FOREIGN KEY ("author_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "method_versions" ADD CONSTRAINT "method_versions_author_signature_id_signatures_id_fk" FOREIGN KEY ("author_signature_id") REFERENCES "public"."signatures"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "method_versions" ADD CONSTRAINT "method_versions_approver_id_users_id_fk" FOREIGN KEY ("approver_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "method_versions" ADD CONSTRAINT "method_versions_approver_signature_id_signatures_id_fk" FOREIGN KEY ("approver_signature_id") REFERENCES "public"."signatures"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "methods" ADD CONSTRAINT "methods_material_id_materials_id_fk" FOREIGN KEY ("material_id") REFERENCES "public"."materials"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "api_tokens" ADD CONSTRAINT "api_tokens_owner_id_users_id_fk" FOREIGN KEY ("owner_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "caution_acknowledgements" ADD CONSTRAINT "caution_acknowledgements_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "role_grants" ADD CONSTRAINT "role_grants_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "role_grants" ADD CONSTRAINT "role_grants_requested_by_users_id_fk" FOREIGN KEY ("requested_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "role_grants" ADD CONSTRAINT "role_grants_granted_by_users_id_fk" FOREIGN KEY ("granted_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "role_grants" ADD CONSTRAINT "role_grants_ended_by_users_id_fk" FOREIGN KEY ("ended_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sessions" ADD CONSTRAINT "sessions_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "users" ADD CONSTRAINT "users_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "containers" ADD CONSTRAINT "containers_lot_id_lots_id_fk" FOREIGN KEY ("lot_id") REFERENCES "public"."lots"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deliveries" ADD CONSTRAINT "deliveries_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deliveries" ADD CONSTRAINT "deliveries_supplier_id_suppliers_id_fk" FOREIGN KEY ("supplier_id") REFERENCES "public"."suppliers"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deliveries" ADD CONSTRAINT "deliveries_received_by_users_id_fk" FOREIGN KEY ("received_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "limit_tests" ADD CONSTRAINT "limit_tests_lot_id_lots_id_fk" FOREIGN KEY ("lot_id") REFERENCES "public"."lots"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "limit_tests" ADD CONSTRAINT "limit_tests_recorded_by_users_id_fk" FOREIGN KEY ("recorded_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lot_papers" ADD CONSTRAINT "lot_papers_lot_id_lots_id_fk" FOREIGN KEY ("lot_id") REFERENCES "public"."lots"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lot_papers" ADD CONSTRAINT "lot_papers_raw_file_id_raw_files_id_fk" FOREIGN KEY ("raw_file_id") REFERENCES "public"."raw_files"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lot_papers" ADD CONSTRAINT "lot_papers_added_by_users_id_fk" FOREIGN KEY ("added_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lots" ADD CONSTRAINT "lots_delivery_id_deliveries_id_fk" FOREIGN KEY ("delivery_id") REFERENCES "public"."deliveries"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lots" ADD CONSTRAINT "lots_material_id_materials_id_fk" FOREIGN KEY ("material_id") REFERENCES "public"."materials"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lots" ADD CONSTRAINT "lots_manufacturer_id_manufacturers_id_fk" FOREIGN KEY ("manufacturer_id") REFERENCES "public"."manufacturers"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lots" ADD CONSTRAINT "lots_method_version_id_method_versions_id_fk" FOREIGN KEY ("method_version_id") REFERENCES "public"."method_versions"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "certificates" ADD CONSTRAINT "certificates_lot_id_lots_id_fk" FOREIGN KEY ("lot_id") REFERENCES "public"."lots"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "certificates" ADD CONSTRAINT "certificates_disposition_id_dispositions_id_fk" FOREIGN KEY ("disposition_id") REFERENCES "public"."dispositions"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviation_notes" ADD CONSTRAINT "deviation_notes_deviation_id_deviations_id_fk" FOREIGN KEY ("deviation_id") REFERENCES "public"."deviations"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviation_notes" ADD CONSTRAINT "deviation_notes_by_user_id_users_id_fk" FOREIGN KEY ("by_user_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviations" ADD CONSTRAINT "deviations_lot_id_lots_id_fk" FOREIGN KEY ("lot_id") REFERENCES "public"."lots"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviations" ADD CONSTRAINT "deviations_container_id_containers_id_fk" FOREIGN KEY ("container_id") REFERENCES "public"."containers"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviations" ADD CONSTRAINT "deviations_scan_id_scans_id_fk" FOREIGN KEY ("scan_id") REFERENCES "public"."scans"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviations" ADD CONSTRAINT "deviations_assignee_id_users_id_fk" FOREIGN KEY ("assignee_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviations" ADD CONSTRAINT "deviations_opened_by_users_id_fk" FOREIGN KEY ("opened_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviations" ADD CONSTRAINT "deviations_conclusion_signature_id_signatures_id_fk" FOREIGN KEY ("conclusion_signature_id") REFERENCES "public"."signatures"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "dispositions" ADD CONSTRAINT "dispositions_lot_id_lots_id_fk" FOREIGN KEY ("lot_id") REFERENCES "public"."lots"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "dispositions" ADD CONSTRAINT "dispositions_signature_id_signatures_id_fk" FOREIGN KEY ("signature_id") REFERENCES "public"."signatures"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "decisions" ADD CONSTRAINT "decisions_scan_id_scans_id_fk" FOREIGN KEY ("scan_id") REFERENCES "public"."scans"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "decisions" ADD CONSTRAINT "decisions_library_id_libraries_id_fk" FOREIGN KEY ("library_id") REFERENCES "public"."libraries"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "repeat_requests" ADD CONSTRAINT "repeat_requests_container_id_containers_id_fk" FOREIGN KEY ("container_id") REFERENCES "public"."containers"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "repeat_requests" ADD CONSTRAINT "repeat_requests_scan_id_scans_id_fk" FOREIGN KEY ("scan_id") REFERENCES "public"."scans"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "repeat_requests" ADD CONSTRAINT "repeat_requests_requested_by_users_id_fk" FOREIGN KEY ("requested_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "repeat_requests" ADD CONSTRAINT "repeat_requests_decided_by_users_id_fk" FOREIGN KEY ("decided_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "scans" ADD CONSTRAINT "scans_lot_id_lots_id_fk" FOREIGN KEY ("lot_id") REFERENCES "public"."lots"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "scans" ADD CONSTRAINT "scans_container_id_containers_id_fk" FOREIGN KEY ("container_id") REFERENCES "public"."containers"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "scans" ADD CONSTRAINT "scans_instrument_id_instruments_id_fk" FOREIGN KEY ("instrument_id") REFERENCES "public"."instruments"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "scans" ADD CONSTRAINT "scans_performance_check_id_performance_checks_id_fk" FOREIGN KEY ("performance_check_id") REFERENCES "public"."performance_checks"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "scans" ADD CONSTRAINT "scans_method_version_id_method_versions_id_fk" FOREIGN KEY ("method_version_id") REFERENCES "public"."method_versions"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "scans" ADD CONSTRAINT "scans_raw_file_id_raw_files_id_fk" FOREIGN KEY ("raw_file_id") REFERENCES "public"."raw_files"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "scans" ADD CONSTRAINT "scans_operator_id_users_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "signatures" ADD CONSTRAINT "signatures_signer_id_users_id_fk" FOREIGN KEY ("signer_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "outbox_mails" ADD CONSTRAINT "outbox_mails_to_user_id_users_id_fk" FOREIGN KEY ("to_user_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "saved_filters" ADD CONSTRAINT "saved_filters_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trail_reviews" ADD CONSTRAINT "trail_reviews_signature_id_signatures_id_fk" FOREIGN KEY ("signature_id") REFERENCES "public"."signatures"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trail_reviews" ADD CONSTRAINT "trail_reviews_reviewed_by_users_id_fk" FOREIGN KEY ("reviewed_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "instrument_log_instrument" ON "instrument_log" USING btree ("instrument_id","at");--> statement-breakpoint
CREATE INDEX "performance_checks_instrument" ON "performance_checks" USING btree ("instrument_id","performed_at");--> statement-breakpoint
CREATE UNIQUE INDEX "tolerance_sets_version" ON "tolerance_sets" USING btree ("name","standard","version");--> statement-breakpoint
CREATE UNIQUE INDEX "approved_sources_one_open" ON "approved_sources" USING btree ("material_id","supplier_id","manufacturer_id") WHERE "approved_sources"."withdrawn_at" is null;--> statement-breakpoint
CREATE INDEX "reference_spectra_material" ON "reference_spectra" USING btree ("material_id","status");--> statement-breakpoint
CREATE UNIQUE INDEX "reference_spectra_file_once" ON "reference_spectra" USING btree ("material_id","raw_file_id");--> statement-breakpoint
CREATE INDEX "libraries_made" ON "libraries" USING btree ("made_at");--> statement-breakpoint
CREATE INDEX "method_runs_version" ON "method_runs" USING btree ("method_version_id","created_at");--> statement-breakpoint
CREATE INDEX "mvr_reference" ON "method_version_references" USING btree ("reference_id");--> statement-breakpoint
CREATE UNIQUE INDEX "method_versions_number" ON "method_versions" USING btree ("method_id","version");--> statement-breakpoint
CREATE UNIQUE INDEX "method_versions_one_effective" ON "method_versions" USING btree ("method_id") WHERE "method_versions"."status" = 'effective';--> statement-breakpoint
CREATE INDEX "caution_acknowledgements_user" ON "caution_acknowledgements" USING btree ("user_id","caution","acknowledged_at");--> statement-breakpoint
CREATE UNIQUE INDEX "role_grants_one_open" ON "role_grants" USING btree ("user_id","role") WHERE "role_grants"."ended_at" is null;--> statement-breakpoint
CREATE INDEX "sessions_user" ON "sessions" USING btree ("user_id");--> statement-breakpoint
CREATE UNIQUE INDEX "users_user_name_key" ON "users" USING btree (lower("user_name"));--> statement-breakpoint
CREATE INDEX "raw_files_sha256" ON "raw_files" USING btree ("sha256");--> statement-breakpoint
CREATE UNIQUE INDEX "containers_number" ON "containers" USING btree ("lot_id","number");--> statement-breakpoint
CREATE UNIQUE INDEX "deliveries_note_once" ON "deliveries" USING btree ("supplier_id","delivery_note");--> statement-breakpoint
CREATE INDEX "lots_delivery" ON "lots" USING btree ("delivery_id");--> statement-breakpoint
CREATE INDEX "lots_status" ON "lots" USING btree ("status");--> statement-breakpoint
CREATE INDEX "deviations_lot" ON "deviations" USING btree ("lot_id");--> statement-breakpoint
CREATE INDEX "dispositions_lot" ON "dispositions" USING btree ("lot_id");--> statement-breakpoint
CREATE INDEX "decisions_verdict" ON "decisions" USING btree ("verdict");--> statement-breakpoint
CREATE UNIQUE INDEX "repeat_requests_one_open" ON "repeat_requests" USING btree ("container_id") WHERE "repeat_requests"."outcome" is null;--> statement-breakpoint
CREATE UNIQUE INDEX "scans_attempt" ON "scans" USING btree ("container_id","attempt");--> statement-breakpoint
CREATE INDEX "scans_lot" ON "scans" USING btree ("lot_id");--> statement-breakpoint
CREATE INDEX "scans_method_version" ON "scans" USING btree ("method_version_id");--> statement-breakpoint
CREATE INDEX "signatures_record" ON "signatures" USING btree ("record_type","record_id");--> statement-breakpoint
CREATE INDEX "outbox_mails_waiting" ON "outbox_mails" USING btree ("next_attempt_at") WHERE "outbox_mails"."status" = 'waiting';--> statement-breakpoint
CREATE INDEX "trail_entries_record" ON "trail_entries" USING btree ("record_type","record_id");--> statement-breakpoint
CREATE INDEX "trail_entries_lot" ON "trail_entries" USING btree ("lot_id");--> statement-breakpoint
CREATE INDEX "trail_entries_actor" ON "trail_entries" USING btree ("actor_id","at");--> statement-breakpoint
CREATE INDEX "trail_entries_at" ON "trail_entries" USING btree ("at");--> statement-breakpoint
CREATE INDEX "trail_entries_action" ON "trail_entries" USING btree ("action");