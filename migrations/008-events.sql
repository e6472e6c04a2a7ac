-- What open streams are told. Each topic counts its own events: the count's row is locked until its event is
-- committed, so numbers appear in order and without holes, and who resumes after one misses nothing.
create table event_topics (
  topic text primary key,
  last_id bigint not null
);

create table events (
  topic text not null references event_topics (topic),
  id bigint not null,
  kind text not null,
  data jsonb,
  created_at timestamptz not null default clock_timestamp(),
  primary key (topic, id)
);

create index events_by_age on events (created_at);
