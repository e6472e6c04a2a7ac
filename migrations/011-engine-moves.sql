-- A budget also moves when the engine that reckons it has become another.
alter table budget_moves drop constraint budget_moves_cause_check;
alter table budget_moves add constraint budget_moves_cause_check
  check (cause in ('reading', 'set-aside', 'take-back', 'use-bench', 'use-learned', 'choice', 'engine'));
