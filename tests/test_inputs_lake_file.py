"""A lake file becomes a frozen lake in SI, or all that is wrong with it is said at once."""

from datetime import date

import numpy as np
import pytest

from strata.column.tracers import TRACERS
from strata.errors import InputError
from strata.inputs import load_lake
from strata.inputs.lake_file import layer_faces
from strata.inputs.schema import WaterTable
from strata.inputs.tables import filled, keys
from strata.inputs.units import split


def refusal(folder):
    """Return the messages with which the lake is refused."""
    with pytest.raises(InputError) as caught:
        load_lake(folder.lake)
    return str(caught.value).splitlines()


def test_a_sound_lake_arrives_in_si(sound_lake):
    site = sound_lake.site
    assert (site.name, site.air_pressure, site.start) == (
        "Test lake",
        pytest.approx(0.86e5),
        date(2027, 1, 1),
    )
    assert site.haline_contraction == 0.75e-3  # the default of the site
    np.testing.assert_allclose(sound_lake.hypsography.area[:2], [900e6, 700e6])
    (spring,) = sound_lake.springs
    assert spring.dissolved == {"DIC": 164, "alkalinity": 72, "CH4": 15.5}
    assert spring.ports == 1
    assert sound_lake.bed[0].flux == pytest.approx(0.04)
    np.testing.assert_allclose(sound_lake.climate.rain, 3e-3 / 86400)
    assert set(sound_lake.cast.profiles) == {
        "temperature", "salinity", "CH4", "DIC", "alkalinity",
    }  # fmt: skip
    assert list(sound_lake.texts) == ["lake.toml", "ctd.csv", "gas.csv"]


def test_entering_water_has_one_key_for_each_dissolved_tracer_of_the_column():
    names = {split(key)[0] for key in keys(WaterTable)}
    assert names == set(TRACERS)


def test_zones_set_the_thickness_of_layers(sound_lake):
    faces = sound_lake.layer_faces
    thickness = np.diff(faces)
    inside = (faces[:-1] >= 180) & (faces[1:] <= 240)
    np.testing.assert_allclose(thickness[inside], 4.0)
    assert faces[0] == 0
    assert faces[-1] == 400
    assert thickness[~inside].max() <= 8.0 + 1e-12
    np.testing.assert_allclose(layer_faces(10.0, 3.0, []), [0, 2.5, 5, 7.5, 10])


@pytest.mark.parametrize(
    ("old", "new", "messages"),
    [
        (
            "depth_m = 386",
            "depth = 386",
            ["lake.toml: spring.deep.depth has no unit; write depth_m"],
        ),
        (
            "depth_m = 386",
            "depth_ft = 1266",
            [
                "lake.toml: spring.deep.depth_ft is in a unit that is not taken here; write depth_m"
            ],
        ),
        (
            "flow_m3_s = 3.0",
            "flwo_m3_s = 3.0",
            ["lake.toml: spring.deep.flwo_m3_s is not known; the nearest known is flow_m3_s"],
        ),
        (
            "flow_m3_s = 3.0",
            'flow_m3_s = "three"',
            [
                'lake.toml: spring.deep.flow_m3_s is "three"; a number from 0 to 100000 m3/s is '
                "allowed"
            ],
        ),
        (
            "flow_m3_s = 3.0",
            "flow_m3_s = -3.0",
            ["lake.toml: spring.deep.flow_m3_s is -3; 0 to 100000 m3/s is allowed"],
        ),
        (
            "flow_m3_s = 3.0\n",
            "",
            [
                "lake.toml: spring.deep.flow_m3_s is missing; a number from 0 to 100000 m3/s is "
                "allowed"
            ],
        ),
        (
            "flow_m3_s = 3.0",
            "flow_m3_s = nan",
            [
                "lake.toml: spring.deep.flow_m3_s is nan; a number from 0 to 100000 m3/s is "
                "allowed"
            ],
        ),
        (
            "depth_m = 386",
            "depth_m = 412",
            ["lake.toml: spring.deep.depth_m is 412; the lake floor is at 400 m"],
        ),
        (
            "depth_m = 386",
            "depth_m = -10",
            [
                "lake.toml: spring.deep.depth_m is -10; 0 to 2000 m is allowed (depth counts down "
                "from the lake surface, which is at 0)"
            ],
        ),
        (
            "[site]",
            "[side]",
            [
                "lake.toml: side is not known; the nearest known is site",
            ],
        ),
        (
            "[mixing]\n",
            "[grind]\n",
            [
                "lake.toml: mixing is missing; a table is required",
                "lake.toml: grind is not known; the nearest known is grid",
            ],
        ),
        (
            "start = 2027-01-01",
            'start = "2027-01-01"',
            [
                'lake.toml: site.start is "2027-01-01"; a date such as 2027-01-31, without quotes, '
                "is required"
            ],
        ),
        (
            "depth_m = [0, 100, 200, 300, 400]",
            "depth_m = [0, 200, 100, 300, 400]",
            ["lake.toml: basin.depth_m has 100 after 200; depths must rise"],
        ),
        (
            "area_km2 = [900, 700, 530, 330, 0]",
            "area_km2 = [900, 700, 530, 330]",
            ["lake.toml: basin.area_km2 has 4 values; 5 are required, as in depth_m"],
        ),
        (
            "area_km2 = [900, 700, 530, 330, 0]",
            "area_km2 = [900, 700, 750, 330, 0]",
            ["lake.toml: basin.area_km2 has 750 after 700; areas must not grow with depth"],
        ),
        (
            "area_km2 = [900, 700, 530, 330, 0]\n",
            "",
            [
                "lake.toml: basin.area_km2 is missing; give hypsography, or depth_m and area_km2"
            ],
        ),
        (
            "[basin]\n",
            '[basin]\nhypsography = "basin.csv"\n',
            ["lake.toml: basin.hypsography stands beside depth_m; give the areas in one way"],
        ),
        (
            "wind_speed_m_s = [3, ",
            "wind_speed_m_s = [",
            ["lake.toml: climate.wind_speed_m_s has 11 values; 12 are required"],
        ),
        (
            "wind_speed_m_s = [3, ",
            "wind_speed_m_s = [-3, ",
            ["lake.toml: climate.wind_speed_m_s.1 is -3; 0 to 30 m/s is allowed"],
        ),
        (
            "least_m2_s = 1e-9",
            "least_m2_s = 1e-5",
            ["lake.toml: mixing.least_m2_s is 1e-05; at most most_m2_s (1e-06) is allowed"],
        ),
        (
            "coefficient_m2_s2 = 2.8e-9\n",
            "",
            [
                "lake.toml: mixing.coefficient_m2_s2 is missing; a number from 1e-11 to 1e-06 "
                "m2/s2 is allowed (such lakes lie near 3e-9, the ocean at 1e-7)"
            ],
        ),
        (
            'tracer = "heat"',
            'tracer = "CH4"',
            ['lake.toml: bed.1.flux_W_m2 does not suit "CH4"; write flux_mol_m2_yr'],
        ),
        (
            'tracer = "heat"',
            'tracer = "warmth"',
            [
                'lake.toml: bed.1.tracer is "warmth"; "heat" or "salinity" or "DIC" or '
                '"alkalinity" or "calcium" or "CH4" or "N2" or "O2" or "H2S" or "phosphate" is '
                "allowed"
            ],
        ),
        (
            "foot_m = 240",
            "foot_m = 170",
            ["lake.toml: grid.zone.1.foot_m is 170; more than top_m (180) is required"],
        ),
        (
            "layer_m = 8.0",
            "layer_m = 50.0\nzone = []",
            None,
        ),
        (
            'file = "gas.csv"',
            'file = "gases.csv"',
            ["gases.csv does not exist"],
        ),
        (
            'file = "gas.csv"',
            'file = "ctd.csv"\nerror.temperature_degC = 0.1\nerror.salinity_g_kg = 0.1',
            [
                "ctd.csv: column temperature is given by ctd.csv too; one cast of each is allowed",
                "ctd.csv: column salinity is given by ctd.csv too; one cast of each is allowed",
                "lake.toml: cast has no column for DIC or CO2",
                "lake.toml: cast has no column for alkalinity or pH",
                "lake.toml: cast has no column for CH4",
            ],
        ),
        (
            "flux_W_m2 = 0.04",
            'flux_W_m2 = 0.04\n\n[laws]\nsalting_out = "setchenow"',
            [
                'lake.toml: laws.salting_out is "setchenow"; "weisenberger-schumpe" or "generic" '
                'or "none" is allowed'
            ],
        ),
    ],
)
def test_a_mistake_gets_one_message_with_its_key(folder, old, new, messages):
    folder.spoil(folder.lake, old, new)
    if messages is None:
        assert any("zone" in line for line in refusal(folder))
    else:
        assert refusal(folder) == messages


def test_all_mistakes_of_all_files_come_at_once(folder):
    folder.spoil(folder.lake, "depth_m = 386", "depth = 386")
    folder.spoil(folder.lake, "flow_m3_s = 60.0", "flow_m3_s = -60.0")
    folder.spoil(folder.lake, "least_m2_s = 1e-9", "least_m2_s = 1e-5")
    folder.rewrite(folder.ctd, 5, "4,x,1.2")
    folder.rewrite(folder.gas, 21, None)
    assert refusal(folder) == [
        "lake.toml: spring.deep.depth has no unit; write depth_m",
        "lake.toml: river.rivers.flow_m3_s is -60; 0 to 100000 m3/s is allowed",
        "lake.toml: mixing.least_m2_s is 1e-05; at most most_m2_s (1e-06) is allowed",
        'ctd.csv: row 5, column temperature_degC is "x"; a number is required',
        *(
            f"gas.csv: column {name} stops at 380 m; 392 m or more is required (the lake floor "
            "is at 400 m)"
            for name in ("CH4_mol_m3", "DIC_mol_m3", "alkalinity_eq_m3")
        ),
    ]


def test_a_missing_file_a_folder_and_broken_toml_are_refused(folder):
    with pytest.raises(InputError, match=r"^nowhere/lake\.toml does not exist$"):
        load_lake("nowhere/lake.toml")
    (folder.path / "lakes").mkdir()
    with pytest.raises(InputError, match=r"^lakes is a folder; a file is required$"):
        load_lake("lakes")
    folder.lake.write_text("[site\n")
    assert refusal(folder)[0].startswith("lake.toml is not valid TOML: ")
    folder.lake.write_bytes(b'name = "\xff"\n')
    assert refusal(folder) == ["lake.toml is not text in UTF-8"]


def test_names_of_springs_must_differ(folder):
    text = folder.lake.read_text()
    spring = text[text.index("[[spring]]") : text.index("[[river]]")]
    folder.spoil(folder.lake, "[[river]]", spring + "[[river]]")
    assert refusal(folder) == [
        'lake.toml: spring.2.name is "deep", which is taken; names must differ'
    ]


def test_hypsography_may_stand_in_a_file_of_its_own(folder, sound_lake):
    folder.spoil(folder.lake, "depth_m = [0, 100, 200, 300, 400]\n", "")
    folder.spoil(
        folder.lake, "area_km2 = [900, 700, 530, 330, 0]", 'hypsography = "basin.csv"'
    )
    rows = ["depth_m,area_km2", "0,900", "100,700", "200,530", "300,330", "400,0"]
    (folder.path / "basin.csv").write_text("\n".join(rows))
    lake = load_lake(folder.lake)
    np.testing.assert_array_equal(lake.hypsography.area, sound_lake.hypsography.area)
    (folder.path / "basin.csv").write_text("\n".join([*rows[:3], "90,530", *rows[4:]]))
    assert refusal(folder)[0] == "basin.csv: column depth_m has 90 after 100; depths must rise"


def test_conductivity_needs_a_factor_and_gives_salinity(folder):
    lines = folder.ctd.read_text().splitlines()
    lines[1] = "depth_m,temperature_degC,conductivity_mS_cm"
    folder.ctd.write_text("\n".join(lines))
    folder.spoil(folder.lake, "error.salinity_g_kg", "error.conductivity_mS_cm")
    assert refusal(folder) == [
        "lake.toml: site.conductivity_factor_g_kg_per_mS_cm is missing; the cast gives "
        "conductivity"
    ]
    folder.spoil(folder.lake, "[basin]", "conductivity_factor_g_kg_per_mS_cm = 0.8\n\n[basin]")
    lake = load_lake(folder.lake)
    salinity = lake.cast.profiles["salinity"]
    _, warmth, reading = (float(cell) for cell in lines[-1].split(","))
    at_25 = reading / (1 + 0.02 * (warmth - 25))  # the usual 2 % per kelvin, at 25.6 degC
    assert salinity.value[-1] == pytest.approx(0.8 * at_25, rel=0.002)
    assert salinity.error[-1] == pytest.approx(0.8 * 0.005, rel=0.05)


def test_laws_of_the_lake_file_reach_the_site_with_its_ions(folder):
    folder.spoil(folder.lake, "[basin]", "magnesium_share = 0.4\n\n[basin]")
    folder.spoil(folder.lake, "[mixing]", "[laws]\npressure_term = false\n\n[mixing]")
    lake = load_lake(folder.lake)
    assert lake.site.laws == {"pressure_term": False, "magnesium_share": 0.4}


def test_a_gap_is_taken_only_where_the_lake_file_says_so(folder):
    cells = folder.gas.read_text().splitlines()[8].split(",")
    folder.rewrite(folder.gas, 9, ",".join([cells[0], "", "", *cells[3:]]))
    assert refusal(folder) == [
        "gas.csv: row 9, column CH4_mol_m3 is empty; a number is required"
    ]
    folder.spoil(folder.lake, 'file = "gas.csv"', 'file = "gas.csv"\ngaps = true')
    lake = load_lake(folder.lake)
    assert len(lake.cast.profiles["CH4"].depth) == len(lake.cast.profiles["DIC"].depth) - 1


# What physics says about a cast -------------------------------------------------------------


def test_a_cast_unstable_beyond_its_error_is_refused_by_row(folder):
    line = folder.ctd.read_text().splitlines()[62]  # 120 m
    depth, temperature, salinity = line.split(",")
    folder.rewrite(folder.ctd, 63, f"{depth},{temperature},{float(salinity) - 0.5:.4f}")
    (message,) = refusal(folder)
    assert message.startswith(
        "ctd.csv: row 63, column temperature_degC makes the water at 120 m lighter than that at "
    )
    assert "0.37 kg/m3" in message or "0.38 kg/m3" in message  # 0.5 g/kg x 0.75e-3 x 1000


def test_an_inversion_within_the_error_is_a_warning_with_its_size(folder, caplog):
    line = folder.ctd.read_text().splitlines()[62]
    depth, temperature, salinity = line.split(",")
    folder.rewrite(folder.ctd, 63, f"{depth},{temperature},{float(salinity) - 0.008:.4f}")
    load_lake(folder.lake)
    assert "ctd.csv: inversions of up to 0.00" in caplog.text


def test_gas_supersaturated_below_the_mixed_layer_is_refused_by_row(folder):
    cells = folder.gas.read_text().splitlines()[8].split(",")  # 160 m
    folder.rewrite(folder.gas, 9, ",".join([cells[0], "30", "0.5", *cells[3:]]))
    unstable, message = refusal(folder)  # so much methane makes the water light, too
    assert unstable.startswith(
        "ctd.csv: row 83, column temperature_degC makes the water at 160 m"
    )
    assert message.startswith("gas.csv: row 9, column CH4_mol_m3 and the other gases make ")
    assert message.endswith(" bar at 160 m, is allowed below the mixed layer")


def test_filled_yields_keys_as_their_users_write_them():
    table = WaterTable(
        temperature_degC=20.0, salinity_g_kg=1.0, DIC_mol_m3=1.0, alkalinity_eq_m3=1.0
    )
    assert dict(filled(table)) == {
        "temperature_degC": 20,
        "salinity_g_kg": 1,
        "DIC_mol_m3": 1,
        "alkalinity_eq_m3": 1,
    }
