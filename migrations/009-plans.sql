-- Plans: asked for once, worked out in the background, kept with what they were made from.
create table plans (
  id uuid primary key,
  race_id text not null,
  date date not null,
  car_id text not null,
  sky_id text not null,
  wanted jsonb not null,
  inputs_hash text not null,
  engine_version text not null,
  state text not null check (state in ('working', 'done', 'failed', 'cancelled')),
  started_at timestamptz not null default clock_timestamp(),
  ended_at timestamptz,
  fault jsonb,
  plan jsonb,
  save_number bigint generated always as identity
);

create index plans_by_race on plans (race_id, save_number desc);
