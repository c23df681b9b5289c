#!/usr/bin/env python3
"""Writes the recordings of this folder, their sheets, and what must come out of them.

Every recording is invented. The results are computed here from what was recorded, never from the text that ohmwright reads and
never by ohmwright: a load is 25 kN per mV/V, a strain solves the quarter bridge in closed form, moments go through the zone
database of Python. Error texts and notes are written by hand. `make.py --compare` writes nothing and says what differs.

NAME.csv is the recording, NAME.toml the sheet; NAME.want the table, or NAME.error the message; NAME.notes lines that must be
among the remarks. A sheet that begins with `# uncertainty` is converted with `--uncertainty`.
"""
import math
import pathlib
import sys
from datetime import datetime, timedelta, timezone
from zoneinfo import ZoneInfo

HERE = pathlib.Path(__file__).parent
FILES = {}

# what was recorded, mV/V: no result lies near half of its last digit
MV = [0.0113, 0.5127, -0.2371, 1.2076]
CELL = '[channel.cell]\ncolumn = "load"\nreads = "mV/V"\ndecimals = 4\ntransducer = { rated = "2 mV/V", capacity = "50 kN" }\n'
SPAN = (
    '[channel.span]\ncolumn = "load"\nreads = "mV/V"\ndecimals = 2\n'
    'gauge = { resistance = "350 ohm", gauge_factor = %s }\nbridge = { arms = ["e", "0", "0", "0"] }\n'
)


def kn(mv):
    """A full bridge of four equal arms is linear: 2 mV/V at 50 kN."""
    return fixed(25 * mv, 4)


def strain(mv, factor=2.0):
    """One gauge among three equal resistors: y = x/(2 (2 + x)), x = 4 y/(1 - 2 y), e = x/k."""
    y = mv / 1e3
    return 4 * y / (1 - 2 * y) / factor * 1e6


def fixed(value, digits):
    text = f"{value:.{digits}f}"
    return text[1:] if float(text) == 0 and text.startswith("-") else text


def put(name, content):
    assert name not in FILES, name
    FILES[name] = content if isinstance(content, bytes) else content.encode()


def case(name, recording, sheet, want=None, error=None, notes=()):
    put(f"{name}.csv", recording)
    put(f"{name}.toml", sheet)
    assert (want is None) != (error is None), name
    if want is not None:
        put(f"{name}.want", "".join(line + "\n" for line in want))
    else:
        put(f"{name}.error", error + "\n")
    if notes:
        put(f"{name}.notes", "".join(line + "\n" for line in notes))


def loads(times, mvs=MV, header="time"):
    return [f"{header},cell (kN),flags"] + [f"{t},{kn(v)}," for t, v in zip(times, mvs)]


T = ["0", "0.5", "1", "1.5"]


def rows(separator=",", mark=".", end="\n", head=None, times=T, mvs=MV):
    lines = [separator.join(["time", "load"])] if head is None else head
    lines = lines + [separator.join([t.replace(".", mark), f"{v}".replace(".", mark)]) for t, v in zip(times, mvs)]
    return end.join(lines) + end


# separators, decimal marks, line ends
case("comma_lf", rows(), CELL, loads(T))
comma = [t.replace(".", ",") for t in T]
quoted = [f'"{t}"' if "," in t else t for t in comma]
case("semicolon_decimal_comma_crlf", rows(";", ",", "\r\n"), CELL, loads(quoted))
case("tab_decimal_comma_cr", rows("\t", ",", "\r"), CELL, loads(quoted))
case("line_ends_mixed", "time,load\r\n0,0.0113\r0.5,0.5127\n1,-0.2371\r\n1.5,1.2076\r", CELL, loads(T))
case("no_last_line_end", rows()[:-1], CELL, loads(T))
case("comma_decimal_comma_quoted", 'time,load\n"0,0","0,0113"\n"0,5","0,5127"\n', CELL, loads(['"0,0"', '"0,5"'], MV[:2]))
case("separator_at_every_end", "time,load,\n0,0.0113,\n0.5,0.5127,\n", CELL, loads(T[:2], MV[:2]))
case("blank_lines_and_comments", "# run 7\n\ntime,load\n\n0,0.0113\n# the lorry\n0.5,0.5127\n\n", CELL, loads(T[:2], MV[:2]))
case("comment_of_their_own", "% run 7\ntime,load\n0,0.0113\n% the lorry\n0.5,0.5127\n", '[recording]\ncomment = "%"\n' + CELL, loads(T[:2], MV[:2]))
case("no_names_column_by_number", "0;0,0113\n0,5;0,5127\n", CELL.replace('"load"', "2"), ["cell (kN),flags"] + [f"{kn(v)}," for v in MV[:2]],
     notes=["no_names_column_by_number.csv: no time column was found: recording.time names one, recording.interval stands in for one"])
case("one_column_in_doubt", "0,0113\n0,5127\n1,2076\n", CELL.replace('"load"', "1"),
     error="one_column_in_doubt.csv: value '' of separator: each row could be one number with a decimal comma, or two cells: state recording.separator or recording.decimal")
case("one_column_stated", "0,0113\n0,5127\n1,2076\n", '[recording]\nseparator = ";"\ndecimal = ","\ninterval = "0.1 s"\n' + CELL.replace('"load"', "1"),
     loads(["0", "0.1", "0.2"], [0.0113, 0.5127, 1.2076], "time (s)"))

# encodings
bridge = "Zeit;Brücke (mV/V);Öl (°C)\n0;0,0113;21,5\n1;0,5127;21,6\n"
degrees = '[channel.oil]\ncolumn = "Öl"\nreads = "degC"\noutput = "degF"\ndecimals = 1\n'
umlaut = CELL.replace("load", "Brücke") + degrees
wanted = ["Zeit,cell (kN),oil (degF),flags"] + [f"{t},{kn(v)},{fixed(c * 1.8 + 32, 1)}," for t, v, c in zip("01", MV, [21.5, 21.6])]
case("utf8", bridge, umlaut, wanted)
case("utf8_mark", "\ufeff" + bridge, umlaut, wanted)
case("windows1252_found", bridge.encode("cp1252"), umlaut, wanted)
case("windows1252_stated", bridge.encode("cp1252"), '[recording]\nencoding = "windows-1252"\n' + umlaut, wanted)
case("utf16_low_first", b"\xff\xfe" + bridge.encode("utf-16-le"), umlaut, wanted)
case("utf16_high_first", b"\xfe\xff" + bridge.encode("utf-16-be"), '[recording]\nencoding = "utf-16"\n' + umlaut, wanted)
case("utf16_no_mark_stated", bridge.encode("utf-16-be"), '[recording]\nencoding = "utf-16"\n' + umlaut, wanted)
case("utf16_no_mark", bridge.encode("utf-16-le"), umlaut,
     error='utf16_no_mark.csv: not a text file: every second byte is zero, as in UTF-16 without a byte-order mark: state encoding = "utf-16"')
case("utf16_contradicted", b"\xff\xfe" + bridge.encode("utf-16-le"), '[recording]\nencoding = "utf-8"\n' + umlaut,
     error="utf16_contradicted.csv: value 'utf-8' of encoding: the file begins with the byte-order mark of UTF-16")
keep = "time,load,note\n0,0.0113,lift\U0001d70e\n1,0.5127,Ende\n"
case("utf16_beyond_the_first_plane", b"\xff\xfe" + keep.encode("utf-16-le"), '[recording]\nkeep = ["note"]\n' + CELL,
     ["time,note,cell (kN),flags", f"0,lift\U0001d70e,{kn(MV[0])},", f"1,Ende,{kn(MV[1])},"])
case("a_byte_that_is_no_character", b"time,load,note\n0,0.0113,l\xc3\xa4dt\n1,0.5127,l\xffd\n", '[recording]\nkeep = ["note"]\nencoding = "utf-8"\n' + CELL,
     ["time,note,cell (kN),flags", f"0,lädt,{kn(MV[0])},", f"1,l\ufffdd,{kn(MV[1])},"],
     notes=["a_byte_that_is_no_character.csv:3: 1 row with a kept text that is not in the encoding of the file"])

# lines above the rows
case("lines_about_the_run", "Load test\nProbe;7;left\nRate;2;Hz\n\ntime;load\ns;mV/V\n" + rows(";", ",").split("\n", 1)[1], CELL, loads(quoted))
case("stated_lines_and_junk_between", "junk,1,2\ntime,load\nhello,world,again\ns,mV/V\n1,2\n0,0.0113\n0.5,0.5127\n",
     "[recording]\nnames_line = 2\nunits_line = 4\nfirst_line = 6\n" + CELL, loads(T[:2], MV[:2]))
case("names_over_two_lines", "Span 2,,Deck\ntime,load,\n0,0.0113,5\n0.5,0.5127,6\n", "[recording]\nnames_line = [1, 2]\ntime = \"Span 2 time\"\n" + CELL,
     loads(T[:2], MV[:2], "Span 2 time"))
case("names_line_past_the_end", rows(), "[recording]\nnames_line = 40\n" + CELL,
     error="names_line_past_the_end.csv: value '40' of names_line: this line is blank or past the end of the file")
case("units_contradict", "time,load\ns,V\n0,0.0113\n", CELL,
     error="units_contradict.csv:2:2: value 'V': the unit of column 'load', but channel 'cell' reads mV/V; one of the two is wrong")
case("unit_in_brackets_contradicts", "time,left,load [uV/V]\n0,1,11.3\n", CELL,
     error="unit_in_brackets_contradicts.csv:1:3: value 'uV/V': the unit of column 'load', but channel 'cell' reads mV/V; one of the two is wrong")
case("number_above_the_names", "4711,0.9\ntime,load\n0,0.0113\n0.5,0.5127\n", CELL.replace('"load"', "2"),
     error="number_above_the_names.csv: value '2' of names_line: this line reads as names do, but stands below line 1, which reads as a row: state recording.names_line = 2, or 0 where there are none")
case("number_above_the_names_stated", "4711,0.9\ntime,load\n0,0.0113\n0.5,0.5127\n", "[recording]\nnames_line = 2\n" + CELL, loads(T[:2], MV[:2]))
case("number_that_is_a_header", "time,1,2\n0,5,0.0113\n0.5,6,0.5127\n", CELL.replace('"load"', "2"),
     error="number_that_is_a_header.csv: value '2' of column: column 2 has the header '1', and the header '2' stands over column 3: in quotes it is the header (column = \"2\"; in a list the cell \"\"\"2\"\"\", with three), and column 2 is named by its own")
case("header_that_is_a_number", "time,1,2\n0,5,0.0113\n0.5,6,0.5127\n", CELL.replace('"load"', '"2"'), loads(T[:2], MV[:2]))
case("unit_nobody_knows", "time,load\ns,mV per V\n0,0.0113\n", "[recording]\nnames_line = 1\nunits_line = 2\n" + CELL, loads(T[:1], MV[:1]),
     notes=["unit_nobody_knows.csv:2:2: value 'mV per V': the unit of column 'load' is not known here, and was not compared with mV/V"])
case("column_misspelt", "time,laod\n0,0.0113\n", CELL, error="column_misspelt.csv:1: value 'load': no column has this name; the nearest is 'laod'")
case("column_twice", "time,load,load\n0,0.0113,1\n", CELL, error="column_twice.csv:1: value 'load': columns 2 and 3 have this name; pick one by its number")

# rows that are not as they should be
case("empty", "", CELL, error="empty.csv: the file is empty: it has no names and no rows")
case("header_alone", "time,load\n", CELL, ["time,cell (kN),flags"])
case("one_row", "time,load\n0,0.0113\n", CELL, loads(T[:1], MV[:1]))
case("binary", bytes((i * 73 + i * i * 151) % 256 for i in range(4096)), CELL, error="binary.csv: not a text file: ")
case("open_quote", 'time,load\n0,0.0113\n1,"0.5127\n2,0.1\n', CELL, error="open_quote.csv:3: a quoted cell begins in this line and is not closed")
case("quoted_cells", 'time,note,load\n0,"lorry, heavy","0.0113"\n0.5,"two ""axles""\nrear",0.5127\n', '[recording]\nkeep = ["note"]\n' + CELL,
     ["time,note,cell (kN),flags", f'0,"lorry, heavy",{kn(MV[0])},', f'0.5,"two ""axles""\nrear",{kn(MV[1])},'],
     notes=["quoted_cells.csv:3: 1 row over several lines because of a quoted cell"])
case("ragged", "time,load,x\n0,0.0113,1\n0.5\n1,-0.2371,1,9\n1.5,1.2076\n", CELL,
     ["time,cell (kN),flags", f"0,{kn(MV[0])},", "0.5,,cell:missing", f"1,{kn(MV[2])},", f"1.5,{kn(MV[3])},"],
     notes=["ragged.csv:3: 2 rows with fewer cells than there are columns: the rest is missing, here the first",
            "ragged.csv:4: 1 row with more cells than there are columns: the rest is not read"])
case("sentinels", "time,load\n0,0.0113\n1,-9999\n2,-9999.0\n3,---\n4,OVL\n5,9.9E37\n6,\n7,NaN\n8,inf\n",
     '[recording]\nmissing = ["-9999", "---"]\nsaturated = ["OVL", "9.9e37"]\n' + CELL,
     ["time,cell (kN),flags", f"0,{kn(MV[0])},", "1,,cell:missing", "2,,cell:missing", "3,,cell:missing", "4,,cell:saturated", "5,,cell:saturated",
      "6,,cell:missing", "7,,cell:missing", "8,,cell:saturated"])
case("texts_that_are_no_numbers", "time,load\n0,0.0113\n1,#####\n2,1.5D-1\n3,0x1F\n4,0.5 mV/V\n5,1 000\n", CELL,
     ["time,cell (kN),flags", f"0,{kn(MV[0])},"] + [f"{t},,cell:unreadable" for t in range(1, 6)],
     notes=["texts_that_are_no_numbers.csv:3:2: value '#####': not a number, the first of 5"])
case("thousands_are_not_guessed", "time;load\n0;0,0113\n1;1.234,5\n2;0,5127\n3;-0,2371\n", CELL,
     ["time,cell (kN),flags", f"0,{kn(MV[0])},", "1,,cell:unreadable", f"2,{kn(MV[1])},", f"3,{kn(MV[2])},"],
     notes=["thousands_are_not_guessed.csv:3:2: value '1.234,5': not a number"])
case("blanks_around_numbers", "time ,  load\n 0 , +0.0113\u00a0\n0.5\t,\t5.127E-1 \n", CELL, loads(T[:2], MV[:2]))
case("zero_bytes_in_a_cell", b"time,load\n0,0.0113\n1,0.5\x00127\n", CELL, ["time,cell (kN),flags", f"0,{kn(MV[0])},", "1,,cell:unreadable"],
     notes=["zero_bytes_in_a_cell.csv:3:2: value '0.5\\0127': not a number"])

# time
CHANGE = SPAN % "2.0" + '[[channel.span.change]]\nfrom = "%s"\ngauge = { gauge_factor = 4.0 }\n'


def changed(written, moments, at, header="time", mvs=None):
    """The gauge factor doubles at a moment: which rows stand behind it shows where they were placed."""
    mvs = mvs or [0.5127] * len(written)
    return [f"{header},span (microstrain),flags"] + [
        f"{w},{fixed(strain(v, 4.0 if m >= at else 2.0), 2)}," for w, m, v in zip(written, moments, mvs)
    ]


def stamps(moments, form):
    return [m.strftime(form) for m in moments]


utc = timezone.utc
berlin = ZoneInfo("Europe/Berlin")
at = datetime(2026, 3, 12, 10, 0, 1, tzinfo=utc)
second = [datetime(2026, 3, 12, 9, 59, 59, tzinfo=utc) + timedelta(seconds=i) for i in range(4)]
iso = stamps(second, "%Y-%m-%dT%H:%M:%SZ")
case("time_iso", "time,load\n" + "".join(f"{t},0.5127\n" for t in iso), CHANGE % "2026-03-12T10:00:01Z", changed(iso, second, at))
local = [m.astimezone(berlin) for m in second]
date, clock = stamps(local, "%d.%m.%Y"), stamps(local, "%H:%M:%S")
zone = '[recording]\ntime_zone = "Europe/Berlin"\n'
case("time_in_two_columns", "Datum;Uhrzeit;load\n" + "".join(f"{d};{c};0,5127\n" for d, c in zip(date, clock)),
     zone + 'time = ["Datum", "Uhrzeit"]\ntime_format = "day.month.year hour:minute:second"\n' + CHANGE % "2026-03-12T10:00:01Z",
     changed([f"{d} {c}" for d, c in zip(date, clock)], second, at, "Datum Uhrzeit"))
case("time_in_two_columns_found", "clock,load,date\n" + "".join(f"{c},0.5127,{d}\n" for d, c in zip(stamps(local, "%Y-%m-%d"), clock)),
     zone + 'time = ["date", "clock"]\n' + CHANGE % "12.03.2026 11:00:01".replace("12.03.2026", "2026-03-12"),
     changed([f"{d} {c}" for d, c in zip(stamps(local, "%Y-%m-%d"), clock)], second, at, "date clock"))
month = stamps(second, "%m/%d/%Y %H:%M:%S")
case("time_month_first", "when,load\n" + "".join(f"{t},0.5127\n" for t in month),
     '[recording]\ntime = "when"\ntime_format = "month/day/year hour:minute:second"\n' + CHANGE % "2026-03-12T10:00:01", changed(month, second, at, "when"))
case("time_month_or_day", "when,load\n" + "".join(f"{t},0.5127\n" for t in month), CHANGE % "2026-03-12T10:00:01",
     error="time_month_or_day.toml:8:8: moment '2026-03-12T10:00:01': no moment in the time column could be read; state time_format for the recording (recording time_month_or_day.csv)")
packed = stamps(second, "%Y%m%d%H%M%S")
case("time_packed", "stamp;load\n" + "".join(f"{t};0,5127\n" for t in packed),
     '[recording]\ntime = "stamp"\ntime_format = "yearmonthdayhourminutesecond"\n' + CHANGE % "2026-03-12T10:00:01", changed(packed, second, at, "stamp"))
case("time_in_milliseconds", "time (ms),load\n" + "".join(f"{t},0.5127\n" for t in [0, 500, 1000, 1500]), CHANGE % "1 s",
     changed([0, 500, 1000, 1500], [0, 0.5, 1.0, 1.5], 1.0, "time (ms)"))
case("text_behind_the_last_row", "time,load\n0,0.0113\n0.5,0.5127\nEND OF DATA\n", CELL,
     loads(T[:2], MV[:2]) + ["END OF DATA,,cell:missing"],
     notes=["text_behind_the_last_row.csv:4:1: value 'END OF DATA': not a number, as the time of the other rows is; recording.comment = \"END\" passes over lines that begin like this"])
case("text_behind_the_last_row_stated", "time,load\n0,0.0113\n0.5,0.5127\nEND OF DATA\n", '[recording]\ncomment = "END"\n' + CELL, loads(T[:2], MV[:2]))
case("text_behind_the_last_moment", "time,load\n" + "".join(f"{t},{v}\n" for t, v in zip(iso, MV)) + "END OF DATA\n", CELL,
     loads(iso) + ["END OF DATA,,cell:missing"],
     notes=["text_behind_the_last_moment.csv:6:1: value 'END OF DATA': not a moment that is known by itself, as 2026-03-12T10:00:00Z is; recording.time_format can state its form; recording.comment = \"END\" passes over lines that begin like this"])
case("interval", "load\n0.5127\n0.5127\n0.5127\n0.5127\n", '[recording]\ninterval = "0.1 s"\n' + CHANGE % "0.2 s",
     changed(["0", "0.1", "0.2", "0.3"], [0, 1, 2, 3], 2, "time (s)"))
case("interval_beside_time", rows(), '[recording]\ninterval = "0.1 s"\ntime = "time"\n' + CELL,
     error="interval_beside_time.toml:2:12: recording.interval is for a recording without a time column, but recording.time names one")
case("time_needed", "load\n0.5127\n", CHANGE % "0.2 s",
     error="time_needed.csv: the sheet needs the time of each row, but there is no time column: name it in recording.time, or state recording.interval")
offsets = [datetime(2026, 10, 25, 0, 30, tzinfo=utc) + timedelta(minutes=20 * i) for i in range(4)]
written = [m.astimezone(berlin).isoformat() for m in offsets]
case("time_with_offsets", "time,load\n" + "".join(f"{t},0.5127\n" for t in written), CHANGE % "2026-10-25T01:10:00Z", changed(written, offsets, offsets[2]))


def berlin_rows(name, first, step, count, change, notes, skip=(), more=""):
    moments = [first + timedelta(seconds=step * i) for i in range(count) if i not in skip]
    written = [m.astimezone(berlin).strftime("%Y-%m-%d %H:%M:%S") for m in moments]
    case(name, "time,load\n" + "".join(f"{t},0.5127\n" for t in written), zone + more + CHANGE % change.strftime("%Y-%m-%dT%H:%M:%SZ"),
         changed(written, moments, change), notes=notes)


# the clock shows 02:00 to 03:00 twice in the night of 25 October 2026; 01:00 UTC is when it was set back
back = datetime(2026, 10, 25, 1, 0, tzinfo=utc)
twice = "%s.csv:%d:1: value '2026-10-25 02:%s': the clock showed it twice, since it was set back; %d rows from here on at such times, %d placed in the first pass and %d in the second, so that time goes on"
untold = '; no row before it tells its pass: the %s is taken, and recording.repeated_hour = "%s" takes the %s'
berlin_rows("clock_set_back", back - timedelta(minutes=70), 600, 16, back, [twice % ("clock_set_back", 3, "00:00", 12, 6, 6)])
berlin_rows("clock_set_back_hourly", back - timedelta(hours=3), 3600, 6, back, [twice % ("clock_set_back_hourly", 4, "00:00", 2, 1, 1)])
berlin_rows("clock_set_back_every_45_min", back - timedelta(minutes=90), 2700, 6, back, [twice % ("clock_set_back_every_45_min", 3, "15:00", 3, 1, 2)])
berlin_rows("clock_set_back_with_a_pause", back - timedelta(minutes=20), 60, 60, back, [twice % ("clock_set_back_with_a_pause", 2, "40:00", 15, 5, 10)],
            skip=set(range(5, 50)))
# a recording that begins within the hour, or after a pause in it, does not tell the pass: the sheet does
later = 'repeated_hour = "second"\n'
berlin_rows("repeated_hour_second", back + timedelta(minutes=20), 600, 6, back + timedelta(minutes=45),
            [twice % ("repeated_hour_second", 2, "20:00", 4, 0, 4) + untold % ("second", "first", "first")], more=later)
berlin_rows("repeated_hour_first", back - timedelta(minutes=40), 600, 12, back, [twice % ("repeated_hour_first", 2, "20:00", 10, 4, 6)],
            more='repeated_hour = "first"\n')
berlin_rows("repeated_hour_unsaid", back - timedelta(minutes=20), 600, 2, back, [twice % ("repeated_hour_unsaid", 2, "40:00", 2, 2, 0) + untold % ("first", "second", "second")])
berlin_rows("repeated_hour_behind_a_pause", back - timedelta(minutes=110), 600, 18, back + timedelta(minutes=35),
            [twice % ("repeated_hour_behind_a_pause", 4, "20:00", 4, 0, 4) + untold % ("second", "first", "first")], skip=set(range(2, 13)), more=later)
name = "pause_before_the_clock_is_set_back"
berlin_rows(name, back - timedelta(minutes=110), 600, 18, back - timedelta(minutes=5), [twice % (name, 4, "20:00", 10, 4, 6)], skip=set(range(2, 7)))
berlin_rows("repeated_hour_told_by_rows", back - timedelta(minutes=70), 600, 16, back, [twice % ("repeated_hour_told_by_rows", 3, "00:00", 12, 6, 6)], more=later)
for name, sheet, error in [
    ("word", 'repeated_hour = "secnod"\n', '3:17: recording.repeated_hour is \'secnod\'; expected "first" or "second"; did you mean "second"?'),
    ("number", "repeated_hour = 2\n", "3:17: recording.repeated_hour is a number; expected text in quotes"),
]:
    case(f"repeated_hour_wrong_{name}", rows(), zone + sheet + CELL, error=f"repeated_hour_wrong_{name}.toml:{error}")
case("repeated_hour_without_a_zone", rows(), "[recording]\n" + later + CELL,
     error="repeated_hour_without_a_zone.toml:2:1: recording.repeated_hour needs recording.time_zone: the zone says which hour comes twice")
# moments of the sheet carry their offset there, whatever the form of the recording
night = [back + timedelta(minutes=10 * i) for i in range(-7, 9)]
written = [m.astimezone(berlin).strftime("%d.%m.%Y %H:%M:%S") for m in night]
mvs = [round(0.1 + 0.01 * i, 4) for i in range(len(night))]
text = "time;load\n" + "".join(f"{t};{str(v).replace('.', ',')}\n" for t, v in zip(written, mvs))
case("moment_of_the_sheet_with_offset", text, zone + CHANGE % "2026-10-25T02:30:00+01:00", changed(written, night, back + timedelta(minutes=30), mvs=mvs))
case("zero_over_the_step_back", text, zone + SPAN % "2.0" + 'zero = { from = "2026-10-25T02:50:00+02:00", to = "2026-10-25T02:10:00+01:00" }\n',
     ["time,span (microstrain),flags"] + [f"{w},{fixed(strain(v) - strain(sum(mvs[6:9]) / 3), 2)}," for w, v in zip(written, mvs)],
     notes=[f"span: zero {sum(mvs[6:9]) / 3:.6f} mV/V, mean of 3 readings in the window from 2026-10-25T02:50:00+02:00 to 2026-10-25T02:10:00+01:00"])
# the clock is set forward from 02:00 to 03:00 on 29 March 2026
forward = datetime(2026, 3, 29, 1, 0, tzinfo=utc)
berlin_rows("clock_set_forward", forward - timedelta(minutes=20), 600, 5, forward, [])
case("clock_not_set_forward", "time,load\n2026-03-29 01:50:00,0.5127\n2026-03-29 02:10:00,0.5127\n2026-03-29 02:30:00,0.5127\n", zone + CHANGE % "2026-03-29T01:20:00Z",
     changed(["2026-03-29 01:50:00", "2026-03-29 02:10:00", "2026-03-29 02:30:00"], [50, 70, 90], 80),
     notes=["clock_not_set_forward.csv:3:1: value '2026-03-29 02:10:00': the clock never showed it, since it was set forward; 2 rows from here on at such times, placed as if it had not been"])
case("moment_of_the_sheet_twice", "time,load\n2026-10-25 01:50:00,0.5127\n", zone + CHANGE % "2026-10-25 02:30:00",
     error="moment_of_the_sheet_twice.toml:10:8: moment '2026-10-25 02:30:00': the clock of this zone showed it twice; write it with its offset, +02:00 in the first pass or +01:00 in the second (recording moment_of_the_sheet_twice.csv)")
# a zero in the second pass of a recording that is taken to begin in the first: the key is named
name = "zero_in_the_pass_that_was_not_taken"
later_zero = 'zero = { from = "2026-10-25T02:45:00+01:00", to = "2026-10-25T02:55:00+01:00" }\n'
text = "time,load\n" + "".join(f"2026-10-25 02:{m}:00,{v}\n" for m, v in zip([40, 50], MV))
case(name, text, zone + SPAN % "2.0" + later_zero,
     error=f"{name}.toml:9:17: channel 'span': no zero, since no reading in the window from 2026-10-25T02:45:00+01:00 to 2026-10-25T02:55:00+01:00 can be converted (the recording has no row there) (recording {name}.csv, line 2: '2026-10-25 02:40:00': no row before it tells its pass: the first is taken, and recording.repeated_hour = \"second\" takes the second)")
case("zero_in_the_pass_that_is_stated", text, zone + later + SPAN % "2.0" + later_zero,
     ["time,span (microstrain),flags"] + [f"2026-10-25 02:{m}:00,{fixed(strain(v) - strain(MV[1]), 2)}," for m, v in zip([40, 50], MV)])
# what the sheet states wrongly is told at its place there
for name, sheet, error in [
    ("never", zone + CHANGE % "2026-03-29 02:30:00",
     "10:8: moment '2026-03-29 02:30:00': the clock of this zone never showed it; write it with its offset (recording moment_of_the_sheet_never.csv)"),
    ("without_zone", CHANGE % "2026-03-12 10:00:00",
     "8:8: moment '2026-03-12 10:00:00': it states no zone and the recording does; write it with Z or an offset (recording moment_of_the_sheet_without_zone.csv)"),
    ("of_a_zero", SPAN % "2.0" + 'zero = { from = "noon", to = "2026-03-12T10:00:01Z" }\n',
     "7:17: moment 'noon': it is no moment; write it as 2026-03-12T10:00:00, or in the shape of the recording (recording moment_of_the_sheet_of_a_zero.csv)"),
    ("of_a_second_zero", SPAN % "2.0" + 'zero = { rows = 1, again = { from = "2026-03-12T10:00:01Z", to = "later" } }\n',
     "7:66: moment 'later': it is no moment; write it as 2026-03-12T10:00:00, or in the shape of the recording (recording moment_of_the_sheet_of_a_second_zero.csv)"),
    ("of_a_shunt", SPAN % "2.0" + 'shunt = { from = "10:00", to = "2026-03-12T10:00:01Z", resistor = "100 kohm", across = "arm 1", place = "gauge" }\n',
     "7:18: moment '10:00': the date is missing (recording moment_of_the_sheet_of_a_shunt.csv)"),
    ("in_seconds", CHANGE % "12 s",
     "8:8: moment '12 s': it is no moment; write it as 2026-03-12T10:00:00, or in the shape of the recording (recording moment_of_the_sheet_in_seconds.csv)"),
    ("out_of_order", CHANGE % "2026-03-12T10:00:01Z" + '[[channel.span.change]]\nfrom = "2026-03-12"\ngauge = { gauge_factor = 3.0 }\n',
     "11:8: moment '2026-03-12': it states no zone and the recording does; write it with Z or an offset (recording moment_of_the_sheet_out_of_order.csv)"),
    ("beside_the_recording", SPAN % "2.0" + 'zero = { from = "2026-03-12T11:00:00Z", to = "2026-03-12T12:00:00Z" }\n',
     "7:17: channel 'span': no zero, since no reading in the window from 2026-03-12T11:00:00Z to 2026-03-12T12:00:00Z can be converted (the recording has no row there) (recording moment_of_the_sheet_beside_the_recording.csv)"),
    ("of_a_second_zero_beside_it", SPAN % "2.0" + 'zero = { rows = 1, again = { from = "2026-03-12T11:00:00Z", to = "2026-03-12T12:00:00Z" } }\n',
     "7:37: channel 'span': no second zero, since no reading in the window from 2026-03-12T11:00:00Z to 2026-03-12T12:00:00Z can be converted (the recording has no row there) (recording moment_of_the_sheet_of_a_second_zero_beside_it.csv)"),
]:
    case(f"moment_of_the_sheet_{name}", "time,load\n" + "".join(f"{t},0.5127\n" for t in iso), sheet, error=f"moment_of_the_sheet_{name}.toml:{error}")
dotted = "time,load\n" + "".join(f"{t},0.5127\n" for t in stamps(second, "%d.%m.%Y %H:%M:%S"))
case("moments_of_the_sheet_wrong_way_round", dotted, SPAN % "2.0" + 'zero = { from = "12.03.2026 10:00:01", to = "12.03.2026 10:00:00" }\n',
     error="moments_of_the_sheet_wrong_way_round.toml:7:45: channel 'span': '12.03.2026 10:00:00' must come after '12.03.2026 10:00:01'")
case("time_format_wrong", dotted, '[recording]\ntime_format = "day.month hour:minute"\n' + SPAN % "2.0",
     error="time_format_wrong.toml:2:15: recording.time_format is 'day.month hour:minute': a date needs all of year, month and day; it is written as in \"day.month.year hour:minute:second\"")
case("time_zone_wrong", dotted, '[recording]\ntime_zone = "Europe/Berln"\n' + SPAN % "2.0",
     error='time_zone_wrong.toml:2:13: recording.time_zone is \'Europe/Berln\'; expected a zone as in "Europe/Berlin"; did you mean "Europe/Berlin"?')
case("time_zone_by_its_city", dotted, '[recording]\ntime_zone = "Lisbon"\n' + SPAN % "2.0",
     error='time_zone_by_its_city.toml:2:13: recording.time_zone is \'Lisbon\'; expected a zone as in "Europe/Berlin"; did you mean "Europe/Lisbon"?')
case("interval_of_nothing", rows(), '[recording]\ninterval = "0 s"\n' + SPAN % "2.0", error="interval_of_nothing.toml:2:12: recording.interval must be above zero")
late = "moment_of_the_sheet_after_the_last_row"
case(late, "time,load\n" + "".join(f"{t},0.5127\n" for t in iso), CHANGE % "2026-03-12T11:00:00Z", changed(iso, second, at + timedelta(hours=1)),
     notes=[f"{late}.toml:8:8: channel 'span': the change from 2026-03-12T11:00:00Z on begins after the last row (recording {late}.csv)"])
case("time_of_day_past_midnight", "clock,load\n23:59:59,0.5127\n00:00:00,0.5127\n00:00:01,0.5127\n", zone.replace("time_zone", "# time_zone") + CELL.replace("0.", "0."),
     loads(["23:59:59", "00:00:00", "00:00:01"], [0.5127] * 3, "clock"))
case("time_steps_back", "time,load\n10,0.0113\n11,0.5127\n10.5,-0.2371\n", CELL, loads(["10", "11", "10.5"], MV[:3]),
     notes=["time_steps_back.csv:4: 1 row earlier than the row above"])

# readings that are converted already, with an uncertainty of their own: one rectangular half-width decides, k = p sqrt(3)
oil = [21.37, -4.24]
case("converted_already", "time,oil (°C)\n" + "".join(f"{i},{c}\n" for i, c in enumerate(oil)),
     '# uncertainty\n[channel.oil]\ncolumn = "oil"\nreads = "degC"\noutput = "degF"\ndecimals = 3\nuncertainty = "0.2 degC"\n',
     ['time,oil (degF),"U oil (degF, 95 %)",flags'] + [f"{i},{fixed(c * 1.8 + 32, 3)},{fixed(0.95 * 0.2 * 1.8, 2)}," for i, c in enumerate(oil)])

# zeros
zeroed = SPAN % "2.0"
run0 = [0.0411, 0.0409, 0.0413]
put("zero_of_another.run0.csv", "time,other,load\n" + "".join(f"{i},x,{v}\n" for i, v in enumerate(run0)))
zero = strain(sum(run0) / 3)
case("zero_of_another", rows(), zeroed + 'zero = { file = "zero_of_another.run0.csv", rows = 3 }\n',
     ["time,span (microstrain),flags"] + [f"{t},{fixed(strain(v) - zero, 2)}," for t, v in zip(T, MV)],
     notes=["span: zero 0.041100 mV/V, mean of 3 readings in the first 3 rows of zero_of_another.run0.csv"])
case("zero_of_a_window_elsewhere", rows(), zeroed + 'zero = { file = "zero_of_another.run0.csv", from = "1 s", to = "2 s" }\n',
     ["time,span (microstrain),flags"] + [f"{t},{fixed(strain(v) - strain(sum(run0[1:]) / 2), 2)}," for t, v in zip(T, MV)])
case("zero_elsewhere_misses_its_column", rows(), zeroed.replace('"load"', '"laod"') + 'zero = { file = "zero_of_another.run0.csv", rows = 3 }\n',
     error="zero_of_another.run0.csv:1: value 'laod': no column has this name; the nearest is 'load'")

drift = [0.0100, 0.0102, 0.5, 0.6, 0.0501, 0.0503]
seconds = [0, 1, 10, 20, 29, 30]
table = "time,load,deck\n" + "".join(f"{t},{v},{c}\n" for t, v, c in zip(seconds, drift, [10, 10, 12, 15, 14, 14]))
first, last = strain(sum(drift[:2]) / 2), [strain(v) for v in drift[4:]]
gone = sum(last) / 2 - first
head = "time,span (microstrain),flags"


def figure(value):
    return float(f"{value:.5e}")


found = f"span: {figure(gone)} microstrain at the second zero, mean of 2 readings in the last 2 rows; "
again = 'zero = { rows = 2, again = { rows = 2 }%s }\n'
case("zero_again", table, zeroed + again % "", [head] + [f"{t},{fixed(strain(v) - first, 2)}," for t, v in zip(seconds, drift)],
     notes=[found + "it stays in the results"])
share = [min(max((t - 0.5) / (29.5 - 0.5), 0), 1) for t in seconds]
case("drift_in_time", table, zeroed + again % ', drift = "time"',
     [head] + [f"{t},{fixed(strain(v) - first - gone * s, 2)}," for t, v, s in zip(seconds, drift, share)],
     notes=[found + "it is taken off in proportion to time, over 29 s"])
case("drift_in_time_of_a_window", table, zeroed + 'zero = { from = "0 s", to = "1 s", again = { from = "29 s", to = "30 s" }, drift = "time" }\n',
     [head] + [f"{t},{fixed(strain(v) - first - gone * s, 2)}," for t, v, s in zip(seconds, drift, share)])
deck = '[channel.deck]\ncolumn = "deck"\nreads = "degC"\nshow = false\n'
case("drift_with_temperature", table, zeroed + 'temperature = "deck"\n' + again % ', drift = "temperature"' + deck,
     [head] + [f"{t},{fixed(strain(v) - first - gone * (c - 10) / 4, 2)},{'span:extrapolated' if c > 14.4 else ''}"
               for t, v, c in zip(seconds, drift, [10, 10, 12, 15, 14, 14])],
     notes=[found + "it is taken off in proportion to temperature, from 10 °C to 14 °C"])
case("drift_without_a_span", table.replace(",14\n", ",10\n"), zeroed + 'temperature = "deck"\n' + again % ', drift = "temperature"' + deck,
     error="drift_without_a_span.csv: channel 'span': its drift cannot be taken off along temperature, which was 10 °C at the first zero and 10 °C at the second")
case("second_zero_in_the_first", "time,load\n0,0.0113\n1,0.0114\n2,0.0115\n", zeroed + again % "",
     error="second_zero_in_the_first.csv: channel 'span': the second zero, the last 2 rows, begins before the first has ended: the recording has 3 rows")
case("drift_of_a_stated_zero", rows(), zeroed + 'zero = { at = "0 mV/V", again = { rows = 2 }, drift = "time" }\n',
     error="drift_of_a_stated_zero.toml:7:55: a drift in time begins at a zero that this recording holds: rows, or from and to, without a file")


def main():
    differs = []
    for name, content in sorted(FILES.items()):
        path = HERE / name
        if "--compare" in sys.argv[1:]:
            if not path.exists() or path.read_bytes() != content:
                differs.append(name)
        else:
            path.write_bytes(content)
    kept = {"make.py", ".gitattributes", *FILES}
    differs += [p.name for p in HERE.iterdir() if p.is_file() and p.name not in kept]
    cases = sum(name.endswith(".toml") for name in FILES)
    print(f"{cases} recordings" + (f"; differs: {', '.join(differs)}" if differs else ""))
    sys.exit(bool(differs))


main()
