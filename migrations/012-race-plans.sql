-- Plans of one day, or of the days of a race together.
alter table plans add column kind text not null default 'day' check (kind in ('day', 'race'));
drop index plans_by_race;
create index plans_by_race on plans (race_id, kind, save_number desc);
