-- The speeds, car and sky that the crew follows on a day: every version, the highest holds.
create table day_choices (
  race_id text not null,
  date text not null,
  version integer not null check (version >= 1),
  car_id text not null,
  sky_id text not null,
  speeds jsonb not null,
  -- The newest forecast made from it.
  forecast_id uuid not null references forecasts (id),
  created_by uuid,
  saved_at timestamptz not null default clock_timestamp(),
  primary key (race_id, date, version)
);
