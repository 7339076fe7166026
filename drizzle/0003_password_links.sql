CREATE TABLE "password_links" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"token_hash" text NOT NULL,
	"user_id" uuid NOT NULL,
	"created_by" uuid,
	"created_at" timestamp with time zone DEFAULT clock_timestamp() NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"used_at" timestamp with time zone,
	"withdrawn_at" timestamp with time zone,
	CONSTRAINT "password_links_tokenHash_unique" UNIQUE("token_hash")
);
--> statement-breakpoint
CREATE TABLE "role_requests" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"user_id" uuid NOT NULL,
	"role" text NOT NULL,
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
	CONSTRAINT "role_requests_role_known" CHECK ("role_requests"."role" in ('operator','method_owner','approver','auditor','administrator')),
	CONSTRAINT "role_requests_outcome_known" CHECK ("role_requests"."outcome" is null or "role_requests"."outcome" in ('granted','declined')),
	CONSTRAINT "role_requests_third_person" CHECK ("role_requests"."decided_by" is null or ("role_requests"."decided_by" <> "role_requests"."requested_by" and "role_requests"."decided_by" <> "role_requests"."user_id")),
	CONSTRAINT "role_requests_decided_whole" CHECK (num_nulls("role_requests"."outcome", "role_requests"."decided_by", "role_requests"."decided_by_name", "role_requests"."decision_reason", "role_requests"."decided_at", "role_requests"."signature_id") in (0, 6))
);
--> statement-breakpoint
ALTER TABLE "password_links" ADD CONSTRAINT "password_links_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "password_links" ADD CONSTRAINT "password_links_created_by_users_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "role_requests" ADD CONSTRAINT "role_requests_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "role_requests" ADD CONSTRAINT "role_requests_requested_by_users_id_fk" FOREIGN KEY ("requested_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "role_requests" ADD CONSTRAINT "role_requests_decided_by_users_id_fk" FOREIGN KEY ("decided_by") REFERENCES "public"."users"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "role_requests" ADD CONSTRAINT "role_requests_signature_id_signatures_id_fk" FOREIGN KEY ("signature_id") REFERENCES "public"."signatures"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "password_links_user" ON "password_links" USING btree ("user_id");--> statement-breakpoint
CREATE UNIQUE INDEX "role_requests_one_waiting" ON "role_requests" USING btree ("user_id","role") WHERE "role_requests"."outcome" is null;--> statement-breakpoint
CREATE INDEX "role_requests_user" ON "role_requests" USING btree ("user_id");