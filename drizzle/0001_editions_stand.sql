-- What was published does not change: content, hash, number and date never; claims and their engine not once sealed.
-- Deleting a notebook takes its editions along. The publisher's account may go: then the reference becomes null.
CREATE FUNCTION "editions_stand"() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF NEW."id" <> OLD."id" OR NEW."notebook" <> OLD."notebook" OR NEW."number" <> OLD."number"
    OR NEW."hash" <> OLD."hash" OR NEW."summary" <> OLD."summary" OR NEW."content"::text <> OLD."content"::text
    OR NEW."entry_ids" <> OLD."entry_ids" OR NEW."published_at" <> OLD."published_at"
    OR (NEW."published_by" IS DISTINCT FROM OLD."published_by" AND NEW."published_by" IS NOT NULL) THEN
    RAISE EXCEPTION 'edition % of notebook % is immutable', OLD."number", OLD."notebook";
  END IF;
  IF OLD."status" = 'sealed' AND (NEW."status" <> 'sealed' OR NEW."engine" IS DISTINCT FROM OLD."engine"
    OR NEW."sealed_at" IS DISTINCT FROM OLD."sealed_at" OR NEW."report"::text IS DISTINCT FROM OLD."report"::text) THEN
    RAISE EXCEPTION 'edition % of notebook % is sealed', OLD."number", OLD."notebook";
  END IF;
  RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER "editions_stand" BEFORE UPDATE ON "editions" FOR EACH ROW EXECUTE FUNCTION "editions_stand"();
--> statement-breakpoint
CREATE FUNCTION "claims_stand"() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  -- Claims come in the transaction that seals their edition, before its status says so.
  IF TG_OP = 'INSERT' THEN
    IF EXISTS (SELECT 1 FROM "editions" e WHERE e."id" = NEW."edition" AND e."status" = 'sealed') THEN
      RAISE EXCEPTION 'the claims of edition % are sealed', NEW."edition";
    END IF;
    RETURN NEW;
  END IF;
  RAISE EXCEPTION 'the claims of edition % are sealed', OLD."edition";
END $$;
--> statement-breakpoint
CREATE TRIGGER "claims_stand" BEFORE INSERT OR UPDATE ON "claims" FOR EACH ROW EXECUTE FUNCTION "claims_stand"();
