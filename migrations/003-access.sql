-- Who may come in: links by the hash of their token, and the sessions that browsers exchange them for.
create table access_links (
  id uuid primary key default gen_random_uuid(),
  kind text not null check (kind in ('owner', 'share')),
  -- What the holder may do; 'planner' and 'viewer' today, teams bring more.
  role text not null,
  token_sha256 text not null unique check (token_sha256 ~ '^[0-9a-f]{64}$'),
  -- The one day that a share link opens.
  race_id text,
  date text,
  name text not null,
  created_by uuid,
  created_at timestamptz not null default clock_timestamp(),
  revoked_at timestamptz,
  save_number bigint generated always as identity,
  check ((kind = 'share') = (race_id is not null)),
  check ((kind = 'share') = (date is not null))
);

-- At most one owner's link holds at a time.
create unique index access_links_one_owner on access_links (kind) where kind = 'owner' and revoked_at is null;
create index access_links_by_day on access_links (race_id, date, save_number desc);

create table sessions (
  token_sha256 text primary key check (token_sha256 ~ '^[0-9a-f]{64}$'),
  link_id uuid not null references access_links (id),
  created_at timestamptz not null default clock_timestamp(),
  expires_at timestamptz not null
);

create index sessions_by_link on sessions (link_id);
