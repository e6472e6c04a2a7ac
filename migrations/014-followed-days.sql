-- What is followed may end at a camp before the day's road does, and may be taken back so that nothing is followed.
alter table day_choices add column until_camp jsonb;
alter table day_choices add column is_none boolean not null default false;
-- Where a forecast begins in the middle of a day, and where it ends before its road does.
alter table forecasts add column from_here jsonb;
alter table forecasts add column until_camp jsonb;
