-- An independent count of the 24 hourly files of station reports: what stands, which value is out
-- of range, jumps or stands still, and what the hours come to. Plain SQL over the rows that ncdump
-- printed, in a table report (file, station, time, temperature, dew_point), all text, "_" where
-- the file holds its missing value. The rules are those of quality control as written down, each
-- said anew here; nothing of the program is used. Times are Unix seconds, "hour" counts hours.

-- A report without a station's name belongs to nobody; one without both values says nothing.
create table reading as
select station,
       cast(strftime('%s', substr(time, 1, 4) || '-' || substr(time, 6, 2) || '-' ||
                           substr(time, 9, 2) || ' ' || substr(time, 12, 5)) as integer) as at,
       iif(temperature = '_', null, cast(temperature as real)) as t,
       iif(dew_point = '_', null, cast(dew_point as real)) as td
from report
where station <> '' and not (temperature = '_' and dew_point = '_');

-- Of one station and one time stands: what has a temperature, a possible one, no impossible dew
-- point beside it; of such the warmer, then the moister.
create table standing as
select station, at, t, td
from (select *, row_number() over (partition by station, at
                                   order by t is null, t not between -40 and 55,
                                            coalesce(td not between -60 and 55, 0),
                                            t desc nulls last, td desc nulls last) as place
      from reading)
where place = 1;

-- Values of either element with their neighbours, and how far each may be from them by the time
-- between: a jump of 2 is one of more than twice the limit.
create table value (element text, station text, at integer, value real, wrong integer default 0,
                    unconfirmed integer default 0, suspect integer default 0,
                    stuck integer default 0);
create unique index value_place on value (element, station, at);
create table step (element text, longest integer, most real);
insert into step values
  ('temperature', 600, 3), ('temperature', 3600, 4), ('temperature', 7200, 7),
  ('temperature', 10800, 9), ('humidity', 600, 15), ('humidity', 3600, 45);
create view beside as
select rowid as place, *,
       value - lag(value) over w as rise, at - lag(at) over w as since,
       value - lead(value) over w as fall, lead(at) over w - at as until
from value where not wrong
window w as (partition by element, station order by at);
create view jump as
select *,
       rise / (select min(most) from step s
               where s.element = beside.element and s.longest >= since) as up,
       fall / (select min(most) from step s
               where s.element = beside.element and s.longest >= until) as down
from beside;

insert into value (element, station, at, value)
select 'temperature', station, at, t from standing where t between -40 and 55;
update value set wrong = 1 where rowid in
  (select place from jump where element = 'temperature' and up * down > 0
      and min(abs(up), abs(down)) > 2 + 1e-9);
update value set suspect = down is not null, unconfirmed = down is null
from jump
where value.rowid = place and jump.element = 'temperature' and abs(up) > 1 + 1e-9
  and (down is null or (up * down > 0 and abs(down) > 1 + 1e-9));

-- Dew points that can be used become humidities: 100 e0(Td) / e0(T) with FAO-56's equation 11.
create table dew as
select s.station, s.at, td, v.value as t, td not between -60 and 55 as out_of_range,
       coalesce(td between -60 and 55 and td > v.value + 0.5 + 1e-9, 0) as above
from standing s
left join value v on v.element = 'temperature' and v.station = s.station and v.at = s.at
                     and not v.wrong and not v.unconfirmed
where td is not null;
insert into value (element, station, at, value)
select 'humidity', station, at,
       min(100.0, 100.0 * exp(17.27 * td / (td + 237.3)) / exp(17.27 * t / (t + 237.3)))
from dew where t is not null and not out_of_range and not above;
update value set wrong = 1 where rowid in
  (select place from jump where element = 'humidity' and up * down > 0
      and min(abs(up), abs(down)) > 2 + 1e-9);
update value set suspect = down is not null, unconfirmed = down is null
from jump
where value.rowid = place and jump.element = 'humidity' and abs(up) > 1 + 1e-9
  and (down is null or (up * down > 0 and abs(down) > 1 + 1e-9));

-- Standing still: from the newest value at least so long ago up to this one no hole above 2 h and
-- no move; temperature only while humidity moved by 10 % in its 6 h, humidity of 95 % and more
-- only when in its 24 h the temperature moved by 6 °C or not at all.
create table used as
select element, station, at, value, at - lag(at) over w as since
from value where not wrong and not unconfirmed
window w as (partition by element, station order by at);
create unique index used_place on used (element, station, at);
create view stretch as
select u.*, l.length,
       (select max(at) from used p where p.element = u.element and p.station = u.station
                                     and p.at <= u.at - l.length) as start
from used u
join (select 'temperature' as element, 21600 as length union all
      select 'humidity', 43200 union all select 'humidity', 86400) l on l.element = u.element;
create table still as
select s.element, s.station, s.at, s.length,
       (select max(value) - min(value) from used p where p.element = s.element
          and p.station = s.station and p.at between s.start and s.at) as moved,
       (select min(value) from used p where p.element = s.element
          and p.station = s.station and p.at between s.start and s.at) as least,
       (select max(since) from used p where p.element = s.element
          and p.station = s.station and p.at > s.start and p.at <= s.at) as longest_hole,
       (select max(value) - min(value) from used p where p.element = 'humidity'
          and p.station = s.station and p.at between s.at - 21600 and s.at) as humidity_moved,
       (select max(value) - min(value) from used p where p.element = 'temperature'
          and p.station = s.station and p.at between s.at - 86400 and s.at) as temperature_moved
from stretch s where s.start is not null;
update value set stuck = 1 where element = 'temperature' and (station, at) in
  (select station, at from still where element = 'temperature' and moved < 0.1 - 1e-9
      and longest_hole <= 7200 and humidity_moved >= 10 - 1e-9);
update value set stuck = 1 where element = 'humidity' and (station, at) in
  (select station, at from still where element = 'humidity' and moved < 1 - 1e-9
      and longest_hole <= 7200
      and (least < 95 or (length = 86400 and (temperature_moved >= 6 - 1e-9
                                              or temperature_moved < 0.1 - 1e-9))));

-- The hours and their flags.
create table hour as
select station, at / 3600 as hour,
       count(t) as n, avg(t) as mean, min(t) as least, max(t) as most,
       count(rh) as n_humidity, avg(rh) as mean_humidity, min(rh) as least_humidity,
       max(rh) as most_humidity
from (select s.station, s.at, u.value as t, h.value as rh
      from standing s
      left join used u on u.element = 'temperature' and u.station = s.station and u.at = s.at
      left join used h on h.element = 'humidity' and h.station = s.station and h.at = s.at)
group by station, at / 3600;

create table flag as
select station, at / 3600 as hour, element, reason, verdict, count(*) as count from (
  select station, at, 'temperature' as element, 'out of range' as reason, 'wrong' as verdict
  from standing where t not between -40 and 55
  union all
  select station, at, 'dew point', 'out of range', 'wrong' from dew where out_of_range
  union all
  select station, at, 'dew point', 'dew point above temperature', 'wrong' from dew where above
  union all
  select station, at, element, 'spike', 'wrong' from value where wrong
  union all
  select station, at, element, 'spike', 'suspect' from value where suspect
  union all
  select station, at, element, 'unconfirmed', 'suspect' from value where unconfirmed
  union all
  select station, at, element, 'stuck', 'suspect' from value where stuck)
group by station, hour, element, reason, verdict;
