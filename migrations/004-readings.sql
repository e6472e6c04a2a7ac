-- Readings of trackers, never changed: whether one is set aside, and what was said of it, is added beside it.
create table readings (
  race_id text not null,
  id uuid not null,
  car_id text not null,
  car_version integer not null check (car_version >= 1),
  body jsonb not null,
  created_by uuid,
  received_at timestamptz not null default clock_timestamp(),
  save_number bigint generated always as identity,
  primary key (race_id, id)
);

create index readings_in_order on readings (race_id, save_number);

create table reading_marks (
  race_id text not null,
  reading_id uuid not null,
  save_number bigint generated always as identity,
  is_set_aside boolean not null,
  created_by uuid,
  created_at timestamptz not null default clock_timestamp(),
  primary key (race_id, reading_id, save_number),
  foreign key (race_id, reading_id) references readings (race_id, id)
);

create table reading_judgements (
  race_id text not null,
  reading_id uuid not null,
  save_number bigint generated always as identity,
  judgement jsonb not null,
  created_at timestamptz not null default clock_timestamp(),
  primary key (race_id, reading_id, save_number),
  foreign key (race_id, reading_id) references readings (race_id, id)
);
