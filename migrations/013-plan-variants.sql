-- Variants beside a plan: ordered, worked out in the background, kept with what they were made from.
create table plan_variants (
  id uuid primary key,
  plan_id uuid not null references plans (id),
  name text not null,
  variant jsonb not null,
  inputs_hash text not null,
  engine_version text not null,
  state text not null check (state in ('working', 'done', 'failed', 'cancelled')),
  started_at timestamptz not null default clock_timestamp(),
  ended_at timestamptz,
  fault jsonb,
  answer jsonb,
  save_number bigint generated always as identity
);

create index plan_variants_by_plan on plan_variants (plan_id, save_number desc);
