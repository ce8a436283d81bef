"""What is drawn and written is what the numbers say."""

import base64
import datetime
import re
from html.parser import HTMLParser

import matplotlib
import numpy as np
import pytest
import synthetic
from matplotlib.figure import Figure

import strata
from strata import margins, results
from strata.errors import InputError
from strata.limits import BREACHED, Limit, Limits, judge
from strata.report import figures, plot, tables
from strata.report.dossier import dossier
from strata.studies.separate import separate
from strata.studies.today import account_today

matplotlib.use("Agg")
NAMES = ("lake left alone", "shallow return", "deep return <b>")


@pytest.fixture(scope="module")
def lake():
    return synthetic.lake(100)


@pytest.fixture(scope="module")
def runs(lake):
    made = {}
    for name, sinking, drain in zip(NAMES, (0.0, 0.8, 0.1), (0.0, 0.3, 0.3), strict=True):
        plants = () if name == NAMES[0] else ("north",)
        record = synthetic.record(
            lake, years=20.0, sinking=sinking, drain=drain, plants=plants
        )
        made[name] = results.dataset(record, lake, synthetic.plan(name) if plants else None)
    return made


@pytest.fixture(scope="module")
def limits():
    listed = (
        Limit("largest_saturation", 0.6),
        Limit("gradient_sinking_m", 10.0),
        Limit("gradient_strength_share", 0.8),
        Limit("methane_lost_share", 0.1),
        Limit("return_water_in_surface_layer_m3", 2e7),
    )
    return Limits("test limits", listed, 4.0, "Invented limits, no law.", {"limits.toml": "x"})


@pytest.fixture(scope="module")
def verdicts(runs, limits):
    return {name: judge(run, limits, runs[NAMES[0]]) for name, run in runs.items()}


@pytest.fixture(scope="module")
def sweep(lake):
    return separate(lake, synthetic.plan())


@pytest.fixture(scope="module")
def account(lake):
    return account_today(lake, synthetic.plan())


@pytest.fixture
def ax():
    return Figure().subplots()


@pytest.fixture(scope="module")
def page(runs, verdicts, limits, lake, sweep, account, tmp_path_factory):
    path = tmp_path_factory.mktemp("dossier") / "dossier.html"
    dossier(
        runs,
        verdicts,
        limits,
        path,
        lake=lake,
        plans={name: synthetic.plan(name) for name in NAMES[1:]},
        separate={"shallow return": sweep},
        accounts={"shallow return, north": account},
        date=datetime.date(2030, 5, 17),
        command="strata compare lake.toml a.toml b.toml",
    )
    return path.read_text(encoding="utf-8")


# Drawings -----------------------------------------------------------------------------------


def test_gas_pressure_is_drawn_against_depth_with_the_hydrostatic_line(runs, ax):
    run = runs["shallow return"]
    gas, hydrostatic, *_ = plot.gas_pressure(run, year=20, ax=ax)
    np.testing.assert_allclose(gas.get_xdata(), run["gas_pressure"].values[-1] / 1e5)
    np.testing.assert_allclose(gas.get_ydata(), run["depth"])
    np.testing.assert_allclose(hydrostatic.get_xdata(), run["pressure"].values / 1e5)
    top, bottom = ax.get_ylim()[::-1]
    assert (top, bottom) == (0.0, 400.0)  # depth runs down
    assert ax.get_xlabel() == "pressure [bar]"
    assert ax.get_ylabel() == "depth [m]"


def test_the_gases_drawn_add_up_to_the_gas_pressure(runs, ax):
    run = runs["lake left alone"]
    artists = plot.gas_pressure(run, ax=ax)
    outermost = artists[4].get_paths()[0].vertices[:, 0].max()
    assert outermost == pytest.approx(float(run["gas_pressure"][0].max()) / 1e5)


def test_a_section_runs_down_and_right_with_the_limits_it_was_given(runs, ax):
    run = runs["shallow return"]
    mesh, line, *_ = plot.section(run, "methane", ax, (0.0, 20.0))
    assert mesh.get_clim() == (0.0, 20.0)
    assert mesh.get_cmap().name == "cividis"
    assert ax.yaxis_inverted()
    assert not ax.xaxis_inverted()
    np.testing.assert_array_equal(line.get_ydata(), run["gradient_depth"])


def test_a_difference_is_drawn_in_two_hues_around_nought(runs, ax):
    mesh = plot.section(runs["shallow return"], "methane", ax, baseline=runs[NAMES[0]])[0]
    low, high = mesh.get_clim()
    assert low == -high
    assert mesh.get_cmap().name == "PuOr"


def test_saturation_of_the_surface_layer_is_left_blank(runs, ax):
    run = runs["lake left alone"]
    mesh = plot.section(run, "saturation", ax)[0]
    drawn = np.ma.getmaskarray(mesh.get_array()).reshape(run.sizes["depth"], -1)
    surface = float(run["surface_layer_depth"][0])
    np.testing.assert_array_equal(drawn[:, 0], run["face"].values[:-1] < surface - 1e-6)


def test_a_limit_is_a_thick_dashed_line_with_its_name(ax):
    line, text = plot.limit_line(ax, 3.0, "limit: at most 3 m")
    assert line.get_linestyle() == "--"
    assert line.get_linewidth() >= 2.0
    assert text.get_text() == "limit: at most 3 m"
    assert list(line.get_ydata()) == [3.0, 3.0]


def test_plans_differ_by_more_than_colour():
    styles = [plot.plan_style(number) for number in range(6)]
    assert len({style["color"] for style in styles}) == 6
    assert len({str(style["linestyle"]) for style in styles}) == 6


def test_measured_values_are_points_and_the_model_is_a_line(runs, lake, ax):
    cast = lake.cast.profiles["CH4"]
    model, points, *_ = plot.profiles(runs[NAMES[0]], "methane", ax, (0,), cast)
    assert model.get_linestyle() == "-"
    assert points.get_marker() == "o"
    assert points.get_linestyle() in ("None", "none", "")
    np.testing.assert_allclose(points.get_xdata(), cast.value)
    np.testing.assert_allclose(points.get_ydata(), cast.depth)


def test_every_year_shows_its_worst_day(runs):
    run = runs[NAMES[0]]
    season = np.sin(2 * np.pi * np.arange(run.sizes["time"]) / 12.0)
    years, worst = plot.worst_of_year(run, season, upward=True)
    assert len(years) == len(worst)
    np.testing.assert_allclose(worst[:-1], 1.0)
    _, least = plot.worst_of_year(run, season, upward=False)
    np.testing.assert_allclose(least[:-1], -1.0)


def test_all_plans_of_a_figure_share_colours_and_limits(runs):
    drawn = figures.sections(runs, ("methane", "temperature"))
    panels = [ax for ax in drawn.axes if ax.collections and ax.get_title("left") in NAMES]
    assert len(panels) == 3
    assert len({ax.collections[0].get_clim() for ax in panels}) == 1


def test_todays_column_is_drawn_with_what_was_measured_and_what_follows_from_it(runs, lake):
    run = runs[NAMES[0]]
    with figures.house_style():
        figure = figures.today(run, lake)
        figure.canvas.draw()
    axes = figure.axes
    assert figure.legends[0].get_window_extent().x1 < figure.bbox.x1  # all of it is seen
    names = [ax.get_xlabel() for ax in axes]
    assert names == [
        "temperature [°C]", "salinity [g/kg]", "density at air pressure [kg/m³]",
        "N² [1/s²]", "CH$_4$ [mol/m³]", "free CO$_2$ [mol/m³]", "pressure [bar]",
        "saturation [1]",
    ]  # fmt: skip
    assert [bool(ax.get_ylabel()) for ax in axes] == 2 * [True, False, False, False]
    sampled = margins.of_samples(lake)
    points = {ax.get_xlabel(): line for ax in axes for line in ax.lines
              if line.get_marker() == "o"}  # fmt: skip
    for name, expected in (
        ("CH$_4$ [mol/m³]", lake.cast.profiles["CH4"].value),
        ("pressure [bar]", sampled["gas_pressure"].value / 1e5),
        ("saturation [1]", sampled["saturation"].value),
    ):
        np.testing.assert_allclose(points[name].get_xdata(), expected)
        np.testing.assert_allclose(points[name].get_ydata(), lake.cast.profiles["CH4"].depth)
    density = axes[2].lines[0].get_xdata()
    assert np.all(density <= run["density"][0])  # water expands on its way up
    # over the upper 8 m, 0.4 bar, by less than 0.04 kg/m3 (compressibility 4.6e-10 1/Pa)
    np.testing.assert_allclose(density[:2], run["density"][0, :2], atol=0.04)
    stable = run["buoyancy_frequency_squared"].values[0] > 0.0
    np.testing.assert_array_equal(np.isfinite(axes[3].lines[0].get_xdata()), stable)
    for ax in axes:
        assert ax.yaxis_inverted()


def test_the_best_pressure_is_marked_at_the_largest_net_energy(sweep, ax):
    plot.separator_sweep(sweep, "net_energy", ax, 1e6)
    marks = [line for line in ax.lines if line.get_marker() == "o"]
    for mark, case in zip(marks, ("CO2 free", "CO2 bound"), strict=True):
        net = sweep["net_energy"].sel(case=case).values
        best = sweep["pressure"].values[net.argmax()] / 1e5
        np.testing.assert_allclose(mark.get_xdata(), best)


# Tables of the terminal ---------------------------------------------------------------------


def test_the_comparison_names_every_plan_limit_and_status(runs, verdicts, limits):
    text = tables.comparison(runs, verdicts)
    for name in NAMES:
        assert name in text
    for limit in limits.limits:
        assert f"{limit.words}, {limit.rule}" in text
    (row,) = [r for r in verdicts["shallow return"].rows if r.status == BREACHED]
    assert f"shallow return: {row.limit} breached from {row.first_date}" in text
    assert limits.note in text
    assert max(len(line) for line in text.splitlines()) < 130


def test_inspection_gives_gas_in_mol_tonnes_and_volume(runs):
    run = runs[NAMES[0]]
    text = tables.inspect(run)
    moles = float(run["methane_in_place"][0])
    (line,) = [li for li in text.splitlines() if li.startswith("CH4") and "whole lake" in li]
    gmol, mt, km3 = (float(word) for word in line.split()[-3:])
    assert gmol == pytest.approx(moles / 1e9, abs=0.006)
    assert mt == pytest.approx(moles * 16.0425e-3 / 1e9, abs=6e-4)
    assert km3 == pytest.approx(moles * 22.41397e-3 / 1e9, abs=6e-4)
    assert sum("main" in li.split()[:1] for li in text.splitlines()) == 1


def test_inspection_gives_the_work_to_lift_the_worst_water_until_it_bubbles(runs):
    now = runs[NAMES[0]].isel(time=0)
    start = float(now["largest_saturation_depth"])
    at = int(np.argmin(np.abs(now["depth"].values - start)))
    end = start - float(now["lift_to_bubbling"][at])
    # at least the step of the main gradient is lifted all the way from there to the end
    above = 9.78 * float(now["gradient_strength"]) * (float(now["gradient_depth"]) - end)
    work = tables.work_to_bubbling(now)
    assert work > above > 0.0
    assert f"{work:.0f}" in tables.inspect(runs[NAMES[0]])


def test_a_run_of_one_year_makes_a_page(lake, limits, tmp_path):
    short = results.dataset(synthetic.record(lake, years=1.0, plants=()), lake)
    dossier(
        {"alone": short}, {"alone": judge(short, limits, short)}, limits, tmp_path / "a.html"
    )
    text = (tmp_path / "a.html").read_text(encoding="utf-8")
    assert text.count(">2030</th>") == text.count(">2031</th>") > 0


def test_the_ledger_line_gives_the_worst_tracer(runs):
    run = runs[NAMES[0]]
    line = tables.ledger_line(run)
    worst = float(np.abs(run["ledger_error"]).max())
    assert f"{worst:.1e}" in line


def test_numbers_are_written_without_a_negative_nought():
    assert tables.digits(-0.0004, 2) == "0.00"
    assert tables.digits(-1.5, 1) == "−1.5"
    assert tables.digits(float("nan")) == "–"


# The dossier --------------------------------------------------------------------------------


class Outline(HTMLParser):
    """Tags, images and text of a page, in order."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.tags: list[tuple[str, dict[str, str]]] = []
        self.words: list[str] = []
        self.feed(text)

    def handle_starttag(self, tag, attrs):
        self.tags.append((tag, dict(attrs)))

    def handle_data(self, data):
        self.words.append(data)

    def of(self, tag: str) -> list[dict[str, str]]:
        return [attributes for name, attributes in self.tags if name == tag]


def test_the_page_opens_with_the_caution_and_then_the_verdict(page):
    text = " ".join(" ".join(Outline(page).words).split())
    body = text[text.index("Caution: lakes") :]
    order = [
        strata.CAUTION,
        "Verdict",
        "What each plan does",
        "Evidence",
        "How to run it again",
    ]
    places = [body.index(part) for part in order]
    assert places == sorted(places)
    assert body.count(strata.CAUTION) == 2


def test_the_page_holds_all_it_shows_and_runs_nothing(page):
    outline = Outline(page)
    assert not outline.of("script")
    assert not outline.of("link")
    assert all(image["src"].startswith("data:image/") for image in outline.of("img"))
    outside = re.sub(r"data:image/svg\+xml;base64,[A-Za-z0-9+/=]+", "", page)
    assert "http://" not in outside
    assert "https://" not in outside
    assert "url(" not in outside
    assert len(page) < 3e6


def test_pictures_fetch_nothing_either(page):
    for code in re.findall(r"data:image/svg\+xml;base64,([A-Za-z0-9+/=]+)", page):
        svg = base64.b64decode(code).decode()
        for address in re.findall(r'(?:href|src)="([^"]+)"', svg):
            assert address.startswith(("#", "data:"))


def test_every_figure_has_alternative_text_with_numbers_and_a_caption(page):
    outline = Outline(page)
    pictures = outline.of("img")
    assert len(pictures) == 11  # the diagram of the plant is the last
    assert len(outline.of("figcaption")) == len(pictures)
    for picture in pictures:
        assert len(picture["alt"]) > 40
    with_numbers = [picture for picture in pictures if re.search(r"\d", picture["alt"])]
    assert len(with_numbers) == len(pictures)


def test_the_verdict_table_gives_status_first_date_and_distance(page, verdicts):
    table = page[page.index('<table class="verdict">') :]
    table = table[: table.index("</table>")]
    for verdict in verdicts.values():
        for row in verdict.rows:
            assert f"</span>{row.status}" in table
            assert f"least distance {tables.distance_text(row)}" in table
            if row.first_date:
                assert str(row.first_date) in table


def test_what_a_user_wrote_is_shown_and_not_run(page):
    assert "deep return <b>" not in page
    assert "deep return &lt;b&gt;" in page


def test_the_page_lists_inputs_ledger_and_command(page, runs, limits):
    for run in runs.values():
        for file, digest in results.inputs_of(run).items():
            assert digest in page
            assert file.replace("<b>", "&lt;b&gt;") in page
    assert "strata compare lake.toml a.toml b.toml" in page
    worst = max(tables.ledger_worst(run)[1] for run in runs.values())
    assert f"none above {worst:.1e}" in page


def test_streams_are_tabled_and_empty_ones_left_out(page, account):
    text = page[page.index("streams of water with today") :]
    feed, *_, product, vent = account.streams()
    assert f'>pH</th><td>1</td><td class="n">{feed["pH"]:.2f}</td>' in text
    cells = re.search(r">CH4</th><td>1</td>(.*?)</tr>", text)
    assert f">{product['CH4_share']:.4f}<" in cells[1]
    assert vent["flow_mol_s"] == 0.0
    assert ">vent</th>" not in text


def test_the_air_of_a_plant_is_counted_with_the_factor_that_is_stated(page, account):
    assert "a tonne of CH4 counts as 27.9 t CO2 (IPCC AR6, 100 years)" in page
    total = account.figures()["CO2_equivalent_t_a"]
    assert f'<td class="n">{total:.0f}</td>' in page


def test_sentences_follow_from_the_numbers(page, runs):
    text = " ".join(page.split())
    run = runs["shallow return"]
    moved = float(run["gradient_depth"][-1] - run["gradient_depth"][0])
    assert f"The main gradient sinks {moved:.1f} m" in text
    left = 100 * float(run["methane_in_place"][-1] / run["methane_in_place"][0])
    assert f"Of the methane at the start, {left:.0f} % is in the lake at the end" in text
    assert "North takes 12 m³/s from 345 m" in text


def test_the_same_runs_give_the_same_page_but_for_its_date(runs, verdicts, limits, tmp_path):
    def made(day):
        path = tmp_path / "page.html"
        dossier(runs, verdicts, limits, path, date=datetime.date(2030, 1, day))
        return path.read_text(encoding="utf-8")

    assert made(2) == made(1).replace("2030-01-01.</p>", "2030-01-02.</p>")


def test_a_page_that_cannot_be_written_is_refused_in_words(runs, verdicts, limits, tmp_path):
    (tmp_path / "taken").write_text("a file where a folder should be")
    with pytest.raises(InputError, match="cannot be written"):
        dossier(runs, verdicts, limits, tmp_path / "taken" / "dossier.html")
    assert [path.name for path in tmp_path.iterdir()] == ["taken"]


def test_the_lake_left_alone_makes_a_page_too(runs, verdicts, limits, tmp_path):
    alone = {NAMES[0]: runs[NAMES[0]]}
    dossier(alone, {NAMES[0]: verdicts[NAMES[0]]}, limits, tmp_path / "alone.html")
    assert "No plant runs" in (tmp_path / "alone.html").read_text(encoding="utf-8")
