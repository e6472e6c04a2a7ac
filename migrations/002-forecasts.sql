-- Forecasts: a budget with all that it was reckoned from, never changed once saved.
create table forecasts (
  id uuid primary key default gen_random_uuid(),
  race_id text not null,
  race_version integer not null,
  car_id text not null,
  car_version integer not null,
  sky_id text not null,
  sky_version integer not null,
  route_versions jsonb not null,
  speeds jsonb not null,
  inputs_hash text not null,
  engine_version text not null,
  budget jsonb not null,
  created_at timestamptz not null default clock_timestamp(),
  save_number bigint generated always as identity
);

create index forecasts_by_race on forecasts (race_id, save_number desc);
create index forecasts_by_inputs on forecasts (inputs_hash, engine_version, save_number desc);
