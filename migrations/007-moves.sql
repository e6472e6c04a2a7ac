-- What moved a day's closing balance, and by how much.
create table budget_moves (
  race_id text not null,
  save_number bigint generated always as identity,
  date text not null,
  cause text not null
    check (cause in ('reading', 'set-aside', 'take-back', 'use-bench', 'use-learned', 'choice')),
  reading_id uuid,
  -- Points of efficiency by the tracker's name.
  points_pct jsonb not null,
  closing_wh_before double precision,
  closing_wh_after double precision,
  forecast_id uuid not null references forecasts (id),
  created_by uuid,
  created_at timestamptz not null default clock_timestamp(),
  primary key (race_id, save_number),
  foreign key (race_id, reading_id) references readings (race_id, id)
);
