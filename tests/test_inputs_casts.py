"""Casts are read by their headings, and refused by file, row and column."""

import numpy as np
import pytest

from strata.inputs.casts import read_cast, read_hypsography

HEAD = "depth_m,CH4_mol_m3,CH4_error_mol_m3"
ROWS = ["0,0.1,0.01", "100,2,0.1", "200,5,0.2", "395,15,0.5"]


def cast(*lines, gaps=False, stated=None):
    return read_cast("\n".join(lines), "gas.csv", 400.0, gaps, stated or {})


def faults(*lines, **options):
    return [str(fault) for fault in cast(*lines, **options).faults]


def test_a_sound_cast_is_read_with_its_errors():
    found = cast("# surveyed by hand", HEAD, *ROWS)
    assert found.faults == []
    profile = found.profiles["CH4"]
    np.testing.assert_array_equal(profile.depth, [0, 100, 200, 395])
    np.testing.assert_array_equal(profile.value, [0.1, 2, 5, 15])
    np.testing.assert_array_equal(profile.error, [0.01, 0.1, 0.2, 0.5])
    assert found.origins["CH4"].rows == (3, 4, 5, 6)  # lines of the file, comment included


def test_units_in_headings_are_converted_and_columns_may_stand_in_any_order():
    found = cast(
        "N2_umol_L,N2_error_umol_L,depth_m,CH4_mmol_L",
        "500,10,0,0.1", "510,10,200,5", "520,10,400,15",
        stated={"CH4_mmol_L": 0.3},
    )  # fmt: skip
    assert found.faults == []
    np.testing.assert_allclose(found.profiles["N2"].value, [0.500, 0.510, 0.520])
    np.testing.assert_allclose(found.profiles["N2"].error, 0.010)
    np.testing.assert_allclose(found.profiles["CH4"].value, [0.1, 5, 15])  # mmol/L is mol/m3
    np.testing.assert_allclose(found.profiles["CH4"].error, 0.3)


def test_each_quantity_keeps_its_own_depths_where_gaps_are_allowed():
    found = cast(
        "depth_m,CH4_mol_m3,pH",
        "0,0.1,8.9", "100,,7.2", "200,5,", "300,9,7.0", "400,15,6.6",
        gaps=True, stated={"CH4_mol_m3": 0.1, "pH": 0.02},
    )  # fmt: skip
    assert found.faults == []
    np.testing.assert_array_equal(found.profiles["CH4"].depth, [0, 200, 300, 400])
    np.testing.assert_array_equal(found.profiles["pH"].depth, [0, 100, 300, 400])


@pytest.mark.parametrize(
    ("rows", "message"),
    [
        (
            ["0,0.1,0.01", "200,2,0.1", "100,5,0.2", "395,15,0.5"],
            "gas.csv: row 4, column depth_m is 100; more than 200 m is required, as depths must "
            "rise",
        ),
        (
            ["0,0.1,0.01", "100,2,0.1", "100,5,0.2", "395,15,0.5"],
            "gas.csv: row 4, column depth_m is 100, as in row 3; each depth may stand once",
        ),
        (
            ["0,0.1,0.01", "100,2,0.1", "200,NaN,0.2", "395,15,0.5"],
            "gas.csv: row 4, column CH4_mol_m3 is NaN; a number is required",
        ),
        (
            ["0,0.1,0.01", "100,2,0.1", "200,,0.2", "395,15,0.5"],
            "gas.csv: row 4, column CH4_mol_m3 is empty; a number is required",
        ),
        (
            ["0,0.1,0.01", "100,two,0.1", "200,5,0.2", "395,15,0.5"],
            'gas.csv: row 3, column CH4_mol_m3 is "two"; a number is required',
        ),
        (
            ["0,0.1,0.01", "100,2,0.1", "200,-5,0.2", "395,15,0.5"],
            "gas.csv: row 4, column CH4_mol_m3 is -5; 0 to 100 mol/m3 is allowed",
        ),
        (
            ["0,0.1,0.01", "100,2,0.1", "200,5,-0.2", "395,15,0.5"],
            "gas.csv: row 4, column CH4_error_mol_m3 is -0.2; 0 or more is allowed",
        ),
        (
            ["0,0.1,0.01", "100,2,", "200,5,0.2", "395,15,0.5"],
            "gas.csv: row 3, column CH4_error_mol_m3 is empty; a number is required",
        ),
        (
            ["0,0.1,0.01", "100,2,0.1", "200,5,0.2", "430,15,0.5"],
            "gas.csv: row 5, column depth_m is 430; 0 to 400 m is allowed",
        ),
        (
            ["0,0.1,0.01", "100,2,0.1", "200,5,0.2", "350,15,0.5"],
            "gas.csv: column CH4_mol_m3 stops at 350 m; 392 m or more is required (the lake floor "
            "is at 400 m)",
        ),
        (
            ["50,0.1,0.01", "100,2,0.1", "200,5,0.2", "395,15,0.5"],
            "gas.csv: column CH4_mol_m3 starts at 50 m; 20 m or less is required",
        ),
        (
            ["0,0.1,0.01", "100,2,0.1", "200,5", "395,15,0.5"],
            "gas.csv: row 4 has 2 cells; the headings are 3",
        ),
        (
            ["0,0.1,0.01", "395,15,0.5"],
            "gas.csv: column CH4_mol_m3 has 2 values; 3 or more are required",
        ),
    ],
)
def test_a_bad_row_is_named_by_its_line_and_column(rows, message):
    assert faults(HEAD, *rows) == [message]


@pytest.mark.parametrize(
    ("head", "message"),
    [
        (
            "depth_m,CH4,CH4_error_mol_m3",
            "gas.csv: column CH4 has no unit; write CH4_mol_m3 or CH4_mmol_L or CH4_mmol_m3 or "
            "CH4_umol_L",
        ),
        (
            "depth_m,CH4_ppm,CH4_error_mol_m3",
            "gas.csv: column CH4_ppm has an unknown unit; write CH4_mol_m3 or CH4_mmol_L or "
            "CH4_mmol_m3 or CH4_umol_L",
        ),
        (
            "depth,CH4_mol_m3,CH4_error_mol_m3",
            "gas.csv: column depth is not known; the nearest known is depth_m",
        ),
        (
            "depth_m,CH4_mol_m3,CH4_mol_m3",
            "gas.csv: column CH4_mol_m3 stands twice",
        ),
    ],
)
def test_a_bad_heading_is_named(head, message):
    found = faults(head, *ROWS)
    assert found[0] == message


def test_a_quantity_without_a_stated_error_is_refused():
    assert faults("depth_m,CH4_mol_m3", "0,0.1", "200,5", "395,15") == [
        "gas.csv: column CH4_mol_m3 has no error; add a column CH4_error_mol_m3, or state "
        "error.CH4_mol_m3 in the lake file"
    ]


def test_an_error_without_its_quantity_is_refused():
    found = faults(HEAD + ",N2_error_mol_m3", *(row + ",0.1" for row in ROWS))
    assert found == ["gas.csv: column N2_error_mol_m3 has no column N2_mol_m3 beside it"]


def test_an_error_stated_for_a_missing_column_is_refused():
    assert faults(HEAD, *ROWS, stated={"N2_mol_m3": 0.1}) == [
        "gas.csv: column N2_mol_m3 is missing; its error is stated"
    ]


def test_a_quantity_in_two_units_is_refused():
    found = faults(
        "depth_m,CH4_mol_m3,CH4_mmol_L", "0,1,1", "200,5,5", "400,9,9",
        stated={"CH4_mol_m3": 0.1, "CH4_mmol_L": 0.1},
    )  # fmt: skip
    assert found == ["gas.csv: column CH4_mmol_L gives CH4 a second time"]


def test_a_file_without_depths_or_without_anything_is_refused():
    assert faults("CH4_mol_m3,CH4_error_mol_m3", "1,0.1") == [
        "gas.csv: column depth_m is missing"
    ]
    assert faults("# nothing here") == ["gas.csv is empty; a line of headings is required"]


def test_all_faults_of_a_cast_come_at_once():
    found = faults(HEAD, "0,x,0.01", "100,2,0.1", "90,5,0.2", "200,inf,0.2", "390,-1,0.5")
    assert found == [
        "gas.csv: row 4, column depth_m is 90; more than 100 m is required, as depths must rise",
        'gas.csv: row 2, column CH4_mol_m3 is "x"; a number is required',
        "gas.csv: row 5, column CH4_mol_m3 is inf; a number is required",
        "gas.csv: row 6, column CH4_mol_m3 is -1; 0 to 100 mol/m3 is allowed",
        "gas.csv: column CH4_mol_m3 stops at 390 m; 392 m or more is required (the lake floor "
        "is at 400 m)",
    ]


def test_hypsography_is_read_and_refused_by_row():
    depth, area, found = read_hypsography("depth_m,area_km2\n0,900\n400,0\n", "basin.csv")
    assert (depth, area, found) == ([0, 400], [900, 0], [])
    _, _, found = read_hypsography("depth_m,area\n0,900\n", "basin.csv")
    assert [str(fault) for fault in found] == [
        "basin.csv: column area_km2 is missing",
        "basin.csv: column area is not known; depth_m and area_km2 are allowed",
    ]
    _, _, found = read_hypsography("depth_m,area_km2\n0,900\n400,none\n", "basin.csv")
    assert [str(fault) for fault in found] == [
        'basin.csv: row 3, column area_km2 is "none"; a number is required'
    ]
