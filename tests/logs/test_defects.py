"""One tiny file a defect: each reads as the clean one does, or is refused in words that help.

All files tell the same 24 rows, 5 s apart from 2031-05-14 10:00:00 UTC: hookload 1200 kN and up, bit at
2000 m and down.
"""

from pathlib import Path

import numpy as np
import pytest

from forensics.case import Case, ChannelChoice, FluidSettings, LogSettings
from forensics.errors import InputError, LogError
from forensics.logs.read import read_time_logs
from forensics.logs.table import Reason

DATA = Path(__file__).parents[1] / "data" / "logs"
ROWS = np.arange(24)
HOOKLOAD = 1e3 * (1200.0 + 1.5 * ROWS + np.where(ROWS % 3, 3.0, 0.0))
DEPTH = 2000.0 + 0.05 * ROWS


def read(*names, timezone="UTC", **channels):
    paths = tuple(DATA / name for name in names)
    settings = LogSettings(time=paths, timezone=timezone, channels=channels)
    none = Path("none")
    return read_time_logs(
        Case(path=Path("case.toml"), id="x", title="x", logs=settings, survey=none, hole=none, string=none,
             fluid=FluidSettings(density=1200.0))
    )  # fmt: skip


def done(log):
    """Give what history counts, by name."""
    return {(step.name, step.channel): step.samples for step in log.history}


def utc(text):
    return np.datetime64(text, "ms").astype(float) / 1e3


FIRST = utc("2031-05-14T10:00:00")
COLUMNS = {"bit_depth": ChannelChoice("2", "m"), "hookload": ChannelChoice("3", "kN")}
# File: first stamp, columns to name.
SAME = {
    "clean.csv": FIRST,
    "semicolon_decimal_comma.csv": FIRST,
    "tab_units_row.csv": FIRST,
    "blanks_date_and_clock.txt": FIRST,
    "one_name_over_date_and_clock.txt": FIRST,
    "utf16.csv": FIRST,
    "utf16_without_mark.csv": FIRST,
    "byte_order_mark.csv": FIRST,
    "degree_sign_not_utf8.csv": FIRST,
    "packed.csv.gz": FIRST,
    "epoch_seconds.csv": FIRST,
    "epoch_milliseconds.csv": FIRST,
    "serial_days.csv": FIRST,
    "serial_date_and_day_fraction.csv": FIRST,
    "elapsed_seconds.csv": 0.0,
    "day_first.csv": FIRST,
    "month_first.csv": FIRST,
    "midnight_tells_day_first.csv": utc("2031-05-04T23:59:00"),
    "points_are_day_first.csv": utc("2031-05-04T10:00:00"),
    "packed_date_and_clock.csv": utc("2009-05-12T09:05:00"),
    "words_for_date_and_clock.csv": FIRST,
    "clock_over_midnight.csv": 86340.0,
    "date_lost_1970.csv": 86340.0,
    "date_kept_beside_1970.csv": FIRST,
    "preamble.csv": FIRST,
    "unit_glued_to_name.csv": FIRST,
    "thousands_set_apart.csv": FIRST,
    "lone_depth.csv": FIRST,
    "two_depths_two_hookloads.csv": FIRST,
    "late_row.csv": FIRST,
    "repeated_stamp.csv": FIRST,
    "line_too_long.csv": FIRST,
    "time_in_milliseconds_of_a_second.csv": FIRST - 7200.0 + 0.25,
    "elapsed_seconds.las": FIRST,
    "elapsed_minutes.las": FIRST,
    "elapsed_days.las": FIRST,
    "start_with_offset.las": FIRST,
    "start_missing.las": 0.0,
    "iso_stamps.las": FIRST,
    "clock_and_date.las": FIRST,
    "one_curve_for_date_and_clock.las": FIRST,
    "packed_date_and_clock.las": FIRST,
    "index_missing_from_curves.las": FIRST,
    "decimal_commas.las": FIRST,
    "commas_between.las": FIRST,
    "wrapped.las": FIRST,
    "version_3.las": FIRST,
    "line_breaks_in_header.csv": FIRST,
    "start_above_header.csv": FIRST,
    "delimiter_at_line_ends.csv": FIRST,
    "bars_between.csv": FIRST,
    "date_late_at_midnight.csv": utc("2031-05-14T23:59:00"),
    "date_early_at_midnight.csv": utc("2031-05-14T23:59:00"),
    "columns_by_number.xml": FIRST,
    "columns_by_list.xml": FIRST,
    "two_parts.xml": FIRST,
    "index_numbered_alone.xml": FIRST,
    "parts_out_of_order.xml": FIRST,
    "two_logs_other_units.xml": FIRST,
    "frames.wits": FIRST,
    "newest_row_first.csv": FIRST,
    "am_and_pm.csv": FIRST,
    "banner_above_version.las": FIRST,
    "blank_lines_in_header.las": FIRST,
    "bytes_of_nul.csv": FIRST,
    "column_header_line_in_data.las": FIRST,
    "comments_in_data.las": FIRST,
    "curves_twice.las": FIRST,
    "curves_without_names.las": FIRST,
    "data_run_twice.las": FIRST,
    "data_title_of_version_3_in_version_2.las": FIRST,
    "data_title_with_bar.las": FIRST,
    "data_title_with_names.las": FIRST,
    "data_title_with_words.las": FIRST,
    "date_only_first_row.csv": FIRST,
    "day_first_two_digit_year.csv": FIRST,
    "description_cut_at_its_colon.las": FIRST,
    "disclaimer_as_parameter.las": FIRST,
    "dots_in_names.las": FIRST,
    "elapsed_milliseconds.las": FIRST,
    "epoch_microseconds.csv": FIRST,
    "extra_columns.las": FIRST,
    "fragment_of_a_line_at_the_end.las": FIRST,
    "header_fields_empty.las": FIRST,
    "header_repeated.csv": FIRST,
    "hole_depth_zero_bit_negative.csv": FIRST,
    "index_labelled_as_depth.las": FIRST,
    "index_overflowed.las": FIRST,
    "iso_with_milliseconds.csv": FIRST,
    "iso_with_offset.csv": FIRST,
    "latin_1_degree.las": FIRST,
    "leading_and_tail_rows_empty.csv": FIRST,
    "lower_case_names.las": FIRST,
    "many_unknown_curves.las": FIRST,
    "minutes_shared_by_rows.csv": FIRST,
    "no_line_end_at_the_end.las": FIRST,
    "no_version_section.las": FIRST,
    "no_well_section.las": FIRST,
    "offset_changes.csv": FIRST,
    "old_line_ends.csv": FIRST,
    "quoted_everything.csv": FIRST,
    "quoted_text_in_data.las": FIRST,
    "row_of_dashes.csv": FIRST,
    "semicolons_and_decimal_commas.las": FIRST,
    "sep_line.csv": FIRST,
    "serial_days_as_text.csv": FIRST,
    "start_as_c_prints_it.las": FIRST,
    "start_in_an_impossible_month.las": FIRST,
    "start_in_strt_as_iso.las": FIRST,
    "start_in_strt_with_slashes.las": FIRST,
    "start_words_and_points.las": FIRST,
    "start_year_month_day_words.las": FIRST,
    "tabs_between.las": FIRST,
    "text_in_data.las": FIRST,
    "units_above_names.csv": FIRST,
    "utf16.las": FIRST,
    "values_and_descriptions_swapped.las": FIRST,
    "version_2_with_swapped_values.las": FIRST,
    "version_3_curve_and_ascii.las": FIRST,
    "version_3_log_in_two.las": FIRST,
    "version_3_other_sections_first.las": FIRST,
    "version_3_quoted_stamps.las": FIRST,
    "version_3_tabs.las": FIRST,
    "wrapped_with_comments.las": FIRST,
}
REFUSED = {
    "no_such_file.csv": "is missing",
    "empty.csv": "empty",
    "header_alone.csv": "no rows of data",
    "one_row.csv": "two or more",
    "spreadsheet.csv": "archive or a spreadsheet.*save the sheet as CSV",
    "by_depth_alone.las": r"no column of time among 'DEPT', 'HKLD'.*if it is a log by depth.*\[logs\] depth",
    "day_or_month.csv": "line 2.*day first or month first",
    "day_and_month_clash.csv": "some dates put the day first",
    "no_unit.csv": r"column 'hookload'.*no unit.*kN",
    "absurd_unit.csv": r"near 1235.* N can't be.*usual in kN",
    "unit_of_pressure.csv": "unit of pressure.*force.*usual in kN",
    "no_hookload.csv": r"no column for hookload among 'time', 'bit_depth \[m\]', 'hk_a \[kN\]'",
    "hole_depth_only.csv": "no column for bit_depth.*'hole_depth",
    "no_header.csv": "no column for bit_depth among '1', '2', '3'",
    "hookload_all_null.csv": "every value of hookload is missing",
    "hookload_all_blank.csv": "every value of hookload is missing",
    "fixed_width.txt": "column 'BitDepth': no unit is given.*usual in m",
    "start_day_or_month_open.las": "'05/04/2031' can be read day first or month first",
    "time_lost_for_good.csv": "line 32.*does not recover in the 30 rows",
    "no_data_section.las": "no data section",
    "no_rows.las": "no rows",
    "no_curves.las": "no curves",
    "by_depth_only.xml": "logs by depth only",
    "broken.xml": "XML is broken",
    "encoding_of_two_bytes.xml": "save it as UTF-8",
    "units_not_told.wits": "no value here tells the system",
    "units_contradict.wits": "contradict each other",
}


@pytest.mark.parametrize("name", SAME)
def test_reads_as_the_clean_one(name):
    log = read(name)
    np.testing.assert_allclose(log.time - SAME[name], 5.0 * ROWS, atol=2e-3)
    np.testing.assert_allclose(log.values["hookload"], HOOKLOAD, rtol=1e-5)
    np.testing.assert_allclose(log.values["bit_depth"], DEPTH, rtol=1e-6)
    assert log.used.all()
    assert log.interval == pytest.approx(5.0, abs=0.01)


@pytest.mark.parametrize("name", REFUSED)
def test_refused_in_words_that_help(name):
    with pytest.raises(LogError, match=REFUSED[name]) as caught:
        read(name)
    assert Path(str(caught.value.file)).name == name


def test_every_file_of_defects_is_used():
    other = {"header_is_numbers.csv", "optional_without_unit.csv", "null_words.csv", "null_codes.csv",
             "null_smeared.csv", "garbled_lines.csv", "last_line_breaks_off.csv", "all_zero_channels.csv",
             "rpm_zero_while_torque_is_not.csv", "run_on_and_broken_lines.las",
             "stamp_out_of_line.csv", "stamp_far_ahead.csv", "frames_broken_off.wits",
             "stars_and_errors.csv", "infinities.las", "clock_set_back.csv",
             "torque_at_the_end_of_its_count.csv", "pressure_at_the_end_of_its_count.csv",
             "density_in_pounds_per_gallon.csv", "two_hookloads_apart.csv"}  # fmt: skip
    assert {path.name for path in DATA.iterdir()} == (SAME.keys() | REFUSED.keys() | other) - {
        "no_such_file.csv"
    }


def test_columns_without_names_go_by_number():
    log = read("no_header.csv", **COLUMNS)
    np.testing.assert_allclose(log.values["hookload"], HOOKLOAD)
    named = {"bit_depth": ChannelChoice("1", "m"), "hookload": ChannelChoice("2", "kN")}
    np.testing.assert_allclose(read("header_is_numbers.csv", **named).values["hookload"], HOOKLOAD)


def test_optional_channel_without_unit_is_set_aside_and_counted():
    log = read("optional_without_unit.csv")
    assert "torque" not in log.values
    assert "wob" not in log.values
    assert done(log)["unit missing or unknown", "torque"] == 24
    assert any("torque" in warning for warning in log.warnings)


def test_unit_of_the_case_makes_up_for_a_missing_one():
    log = read("no_unit.csv", hookload=ChannelChoice("hookload", "kN"))
    np.testing.assert_allclose(log.values["hookload"], HOOKLOAD)


def test_column_named_in_the_case_but_in_no_file_is_refused():
    with pytest.raises(LogError, match=r"no log has a column 'hookloaf'.*did you mean 'hookload"):
        read("clean.csv", hookload=ChannelChoice("hookloaf"))


def test_null_words_are_no_values():
    log = read("null_words.csv")
    assert list(np.flatnonzero(~log.used)) == [3, 5, 7, 9]
    assert set(log.reason[~log.used]) == {Reason.NULL_HOOKLOAD}
    assert done(log)["no value", "hookload"] == 4
    assert done(log)["no value", "bit_depth"] == 3


@pytest.mark.parametrize(
    ("name", "rows"), [("stars_and_errors.csv", [3, 5, 7]), ("infinities.las", [1, 2, 3])]
)
def test_words_that_recorders_write_for_overflow_are_no_values(name, rows):
    log = read(name)
    assert list(np.flatnonzero(~log.used)) == rows
    assert done(log)["no value", "hookload"] == 3


@pytest.mark.parametrize(
    ("name", "step", "rows"),
    [
        ("newest_row_first.csv", "turned to time order", 24),
        ("minutes_shared_by_rows.csv", "stamp shared by rows", 22),
        ("data_run_twice.las", "merged duplicate stamps", 24),
        ("fragment_of_a_line_at_the_end.las", "unreadable row", 1),
        ("bytes_of_nul.csv", "unreadable row", 1),
        ("header_repeated.csv", "unreadable row", 1),
    ],
)
def test_what_was_mended_is_counted(name, step, rows):
    assert done(read(name))[step, None] == rows


def test_a_clock_set_back_while_the_bit_goes_on_is_carried_on():
    log = read("clock_set_back.csv")
    np.testing.assert_allclose(log.time - FIRST, 5.0 * np.arange(90))
    assert done(log)["clock setting undone", None] == 60
    assert any("set back by 140 s" in warning for warning in log.warnings)


def test_steps_mended_after_an_overflow_are_said():
    assert any("32 bits ran over" in note for note in read("index_overflowed.las").files[0].notes)


def test_null_codes_are_counted_and_give_the_reason():
    log = read("null_codes.csv")
    assert done(log)["null code", "hookload"] == 3
    assert done(log)["null code", "bit_depth"] == 1
    assert list(np.flatnonzero(~log.used)) == [3, 5, 7, 9]
    assert log.reason[5] == Reason.NULL_DEPTH
    assert log.reason[9] == Reason.NULL_HOOKLOAD
    assert np.isnan(log.hookload_logged[3])


def test_smeared_nulls_go_with_their_code():
    log = read("null_smeared.csv")
    assert done(log)["smeared null", "hookload"] == 2
    assert list(np.flatnonzero(~log.used)) == [7, 8, 9]


def test_garbled_lines_are_counted():
    log = read("garbled_lines.csv")
    assert len(log) == 23
    assert done(log)["unreadable row", None] == 2
    assert done(log)["text where a number belongs", "hookload"] >= 1


@pytest.mark.parametrize("name", ["stamp_out_of_line.csv", "stamp_far_ahead.csv"])
def test_a_stamp_gone_wrong_does_not_spoil_the_log(name):
    log = read(name)
    assert len(log) == 23
    assert done(log)["stamp out of line", None] == 1
    assert log.time[-1] == FIRST + 115.0


def test_dates_mended_at_midnight_are_counted():
    assert done(read("date_late_at_midnight.csv"))["date mended at midnight", None] == 3


def test_line_that_breaks_off_is_left_out():
    log = read("last_line_breaks_off.csv")
    assert len(log) == 23
    assert done(log)["unreadable row", None] == 1


def test_broken_las_lines_are_left_out_and_run_on_numbers_parted():
    log = read("run_on_and_broken_lines.las")
    assert len(log) == 23
    assert done(log)["unreadable row", None] == 2
    assert log.reason[8] == Reason.OUT_OF_RANGE
    np.testing.assert_allclose(log.values["hookload"][:8], HOOKLOAD[:8])


def test_zeros_are_a_reading_unless_another_channel_speaks_against_them():
    log = read("all_zero_channels.csv")
    assert "pit_volume" not in log.values
    assert not log.values["rpm"].any()
    assert not log.values["torque"].any()
    assert "rpm" not in read("rpm_zero_while_torque_is_not.csv").values


def test_open_order_of_day_and_month_is_learned_from_another_file():
    log = read("day_or_month.csv", "day_first.csv")
    assert log.time[0] == utc("2031-05-04T10:00:00")
    assert len(log) == 48


@pytest.mark.parametrize(("beside", "day"), [("2031-05-05", "2031-05-04"), ("2031-04-04", "2031-04-05")])
def test_open_order_of_day_and_month_is_settled_by_the_files_beside(tmp_path, beside, day):
    other = tmp_path / "beside.csv"
    rows = "".join(f"{beside}T10:00:{s:02d}Z,2000,1200\n" for s in range(0, 60, 5))
    other.write_text(f"time,bit_depth [m],hookload [kN]\n{rows}")
    log = read("day_or_month.csv", str(other))
    assert utc(f"{day}T10:00:00") in log.time
    assert len(log) == 36


def test_files_without_a_date_beside_dated_ones_are_refused():
    with pytest.raises(LogError, match="no date while other logs"):
        read("clean.csv", "clock_over_midnight.csv")


def test_clocks_of_several_files_are_chained():
    log = read("clock_over_midnight.csv", "date_lost_1970.csv")
    assert len(log) == 48
    assert log.time[24] - log.time[0] == pytest.approx(86400.0)


def test_zone_of_the_case_goes_to_stamps_without_one():
    assert read("day_first.csv", timezone="Europe/Oslo").time[0] == FIRST - 7200.0
    assert read("day_first.csv", timezone="-06:00").time[0] == FIRST + 6 * 3600.0
    assert read("clean.csv", timezone="Europe/Oslo").time[0] == FIRST


def test_average_hookload_is_preferred_and_said_so():
    log = read("two_depths_two_hookloads.csv")
    why = {column.column: column for column in log.files[0].columns}
    assert "preferred to 'THKD'" in why["HKLA"].why
    assert why["VBITDEP"].channel == "bit_tvd"
    assert log.values["hole_depth"][0] == pytest.approx(2010.0)
    assert read("lone_depth.csv").values["hookload_max"][0] == pytest.approx(HOOKLOAD[0] + 9e3)


def test_bad_zone_is_an_input_error():
    with pytest.raises(InputError, match="unknown time zone"):
        read("clean.csv", timezone="Mars/Olympus")


@pytest.mark.parametrize(
    ("name", "channel"),
    [
        ("torque_at_the_end_of_its_count.csv", "torque"),
        ("pressure_at_the_end_of_its_count.csv", "standpipe_pressure"),
    ],
)
def test_readings_at_the_end_of_a_count_are_set_aside_by_that_name(name, channel):
    log = read(name)
    assert done(log)["saturated", channel] == 3
    assert np.isnan(log.values[channel][5:8]).all()
    assert np.isfinite(log.values[channel][8:]).all()


def test_density_in_another_unit_is_left_out_with_the_likely_one():
    log = read("density_in_pounds_per_gallon.csv")
    assert "mud_density" not in log.values
    assert any("likely in ppg (1.294 g/cm3)" in words for words in log.warnings)
    mended = read("density_in_pounds_per_gallon.csv", mud_density=ChannelChoice("mud density [g/cm3]", "ppg"))
    np.testing.assert_allclose(mended.values["mud_density"], 1294.0, rtol=0.02)


def test_two_hookloads_that_differ_are_told_by_how_much():
    log = read("two_hookloads_apart.csv")
    np.testing.assert_allclose(log.values["hookload"], HOOKLOAD)
    assert any("'THKD'; that reads 40.0 kN less" in words for words in log.warnings)
