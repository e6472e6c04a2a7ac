-- Documents (cars, routes, races, skies): every version ever saved, and which one holds now.
create table documents (
  kind text not null check (kind in ('car', 'route', 'race', 'sky')),
  id text not null check (id ~ '^[a-z0-9-]{1,64}$'),
  version integer not null check (version >= 1),
  removed_at timestamptz,
  primary key (kind, id)
);

create table document_versions (
  kind text not null,
  id text not null,
  version integer not null check (version >= 1),
  name text not null,
  body jsonb not null,
  saved_at timestamptz not null default clock_timestamp(),
  -- Order of saving; times may be equal.
  save_number bigint generated always as identity,
  primary key (kind, id, version),
  foreign key (kind, id) references documents (kind, id)
);
