-- Whether a race's forecasts use the learned or the bench curve, and how far its spread is widened.
create table belief_uses (
  race_id text not null,
  save_number bigint generated always as identity,
  which text not null check (which in ('learned', 'bench')),
  widen double precision not null check (widen >= 1),
  created_by uuid,
  created_at timestamptz not null default clock_timestamp(),
  primary key (race_id, save_number)
);
