-- An independent look at the motes' readings in a table mote (mote, series, at, humidity,
-- temperature, label): range, and what differs from both neighbours by more than 3 °C or 15 %
-- (the limits for neighbours up to 10 min apart). Nothing of the program is used. A series is what
-- one station would have sent: all readings, or every sixtieth.

create table value (element text, mote integer, series integer, at integer, value real,
                    most real, label integer, out_of_range integer, wrong integer default 0,
                    suspect integer default 0);
insert into value (element, mote, series, at, value, most, label, out_of_range)
select 'temperature', mote, series, at, temperature, 3, label,
       temperature not between -40 and 55 from mote
union all
select 'humidity', mote, series, at, humidity, 15, label,
       humidity not between 0 and 104 from mote;

create view jump as
select rowid as place, (value - lag(value) over w) / most as up,
       (value - lead(value) over w) / most as down
from value where not out_of_range and not wrong
window w as (partition by element, mote, series order by at);
update value set wrong = 1 where rowid in
  (select place from jump where up * down > 0 and min(abs(up), abs(down)) > 2 + 1e-9);
update value set suspect = 1 where rowid in
  (select place from jump where up * down > 0 and min(abs(up), abs(down)) > 1 + 1e-9);
