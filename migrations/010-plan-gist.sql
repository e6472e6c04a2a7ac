-- Each plan in short, so that a list of plans reads no bodies.
alter table plans add column gist jsonb;
