"""Where plugins are found, in which order, and what a broken package does."""

from __future__ import annotations

import sys

import pytest

from goniosim.catalogue.listing import listed
from goniosim.catalogue.search import Catalogue, load_file
from goniosim.errors import BadInput, Misuse
from goniosim.faces import SHAPES
from goniosim.shipped import shipped_folder


@pytest.fixture(autouse=True)
def clean_surroundings(monkeypatch):
    monkeypatch.delenv("GONIOSIM_PLUGINS", raising=False)
    monkeypatch.delenv("GONIOSIM_STRICT_PLUGINS", raising=False)


@pytest.fixture
def lens_folder(tmp_path, flat_lens):
    """lens_folder(name, title) -> a folder of plugins with one lens."""

    def made(folder: str, title: str, name: str = "demo"):
        lenses = tmp_path / folder / "lenses"
        lenses.mkdir(parents=True, exist_ok=True)
        text = flat_lens.replace("title: Demo", f"title: {title}").replace("name: demo", f"name: {name}")
        (lenses / "any-file-name.yaml").write_text(text)
        return tmp_path / folder

    return made


@pytest.fixture
def installed(tmp_path, monkeypatch):
    """installed(package, entry point's value) -> the folder of a package as pip would install it."""

    def made(package: str, value: str):
        site = tmp_path / "site"
        info = site / f"{package}-0.3.dist-info"
        info.mkdir(parents=True)
        (info / "METADATA").write_text(f"Metadata-Version: 2.1\nName: {package}\nVersion: 0.3\n")
        (info / "entry_points.txt").write_text(f"[goniosim.plugins]\nacme = {value}\n")
        monkeypatch.syspath_prepend(str(site))
        return site / package

    return made


def title(catalogue: Catalogue) -> str:
    return catalogue.load("lens", "demo").values["title"]


def test_order_of_places(lens_folder, monkeypatch):
    first, variable, case = (lens_folder(name, name) for name in ("first", "variable", "case"))
    monkeypatch.setenv("GONIOSIM_PLUGINS", str(variable))
    assert title(Catalogue([first], case)) == "first"
    assert title(Catalogue([], case)) == "variable"
    monkeypatch.delenv("GONIOSIM_PLUGINS")
    assert title(Catalogue([], case)) == "case"
    assert Catalogue().load("lens", "demo") is None


def test_own_folder_goes_before_the_shipped(lens_folder):
    folder = lens_folder("mine", "Mine", name="direct-face-48")
    rows, _ = listed(Catalogue([folder]), ["lens"])
    found = [(row["title"], row["hidden"]) for row in rows if row["name"] == "direct-face-48"]
    assert found == [("Mine", False), ("Direct view, flat face leaned 48 degrees", True)]


def test_missing_folder_is_misuse():
    with pytest.raises(Misuse, match="--plugins no/such: there is no such folder"):
        Catalogue(["no/such"])


def test_installed_package_is_found_without_running_it(installed, lens_folder):
    package = installed("acme_lenses", "acme_lenses.data")
    (lens_folder("made", "From a package")).rename(package.parent / "moved")
    package.mkdir()
    (package / "__init__.py").write_text("raise RuntimeError('imported')")
    (package.parent / "moved").rename(package / "data")
    assert title(Catalogue()) == "From a package"


@pytest.mark.parametrize("value, cause", [
    ("acme_gone", "No package named 'acme_gone'"),
    ("acme_lenses.data", "package 'acme_lenses' holds no folder 'data'"),
    ("acme_lenses", "acme_lenses holds none of scenes/, eyes/, lenses/, media/, scopes/, tools/, rooms/"),
])
def test_broken_package_is_told_and_hurts_nobody(installed, monkeypatch, value, cause):
    package = installed("acme_lenses", value)
    package.mkdir()
    (package / "__init__.py").write_text("")
    words = f"plugins 'acme' from package acme_lenses 0.3 could not be loaded: {cause}"
    catalogue = Catalogue()
    assert catalogue.load("lens", "direct-face-48").name == "direct-face-48"
    assert listed(catalogue, ["lens"])[1] == [words]
    assert words in catalogue.unknown("lens", "their-lens")
    monkeypatch.setenv("GONIOSIM_STRICT_PLUGINS", "1")
    with pytest.raises(BadInput) as caught:
        Catalogue().load("lens", "direct-face-48")
    assert words in str(caught.value)


def test_broken_file_is_listed_as_broken(lens_folder):
    folder = lens_folder("mine", "Mine")
    (folder / "lenses" / "bad.yaml").write_text("goniosim: lens\nname: bad\n")
    rows, _ = listed(Catalogue([folder]), ["lens"])
    bad = next(row for row in rows if row["name"] == "bad")
    assert bad["broken"] and bad["cause"] == "line 1, schema is missing: version of the file format."
    assert not next(row for row in rows if row["name"] == "demo")["broken"]


@pytest.mark.parametrize("code, cause", [
    ("import acme_core", "No module named 'acme_core'"),
    ("thing = 3", "acme_shapes:thing is no goniosim.faces.Shape"),
])
def test_broken_shape_is_told_where_it_is_named(tmp_path, monkeypatch, report, flat_lens, code, cause):
    name = f"spline-{len(code)}"
    info = tmp_path / "site" / "acme_shapes-0.3.dist-info"
    info.mkdir(parents=True)
    (info / "METADATA").write_text("Metadata-Version: 2.1\nName: acme-shapes\nVersion: 0.3\n")
    (info / "entry_points.txt").write_text(f"[goniosim.faces]\n{name} = acme_shapes:thing\n")
    (tmp_path / "site" / "acme_shapes.py").write_text(code)
    monkeypatch.syspath_prepend(str(tmp_path / "site"))
    monkeypatch.delitem(sys.modules, "acme_shapes", raising=False)
    words = report(flat_lens.replace("shape: cylinder", f"shape: {name}"))
    assert f"shape '{name}' from package acme-shapes 0.3 could not be loaded: {cause}. Other plugins" in words


def test_shape_of_a_package_is_used(tmp_path, monkeypatch, flat_lens):
    info = tmp_path / "site" / "acme_tubes-0.3.dist-info"
    info.mkdir(parents=True)
    (info / "METADATA").write_text("Metadata-Version: 2.1\nName: acme-tubes\nVersion: 0.3\n")
    (info / "entry_points.txt").write_text("[goniosim.faces]\ntube = acme_tubes:Tube\n")
    (tmp_path / "site" / "acme_tubes.py").write_text(
        "from goniosim.faces import Cylinder\nclass Tube(Cylinder):\n    name = 'tube'\n")
    monkeypatch.syspath_prepend(str(tmp_path / "site"))
    monkeypatch.setattr("goniosim.catalogue.shapes.SHAPES", dict(SHAPES))
    path = tmp_path / "demo.yaml"
    path.write_text(flat_lens.replace("shape: cylinder", "shape: tube"))
    assert load_file("lens", path).values["bodies"][0]["faces"][2]["radius_mm"] == 6.0


SHIPPED = [(kind, path) for kind, folder in
           (("lens", "lenses"), ("eye", "eyes"), ("medium", "media"), ("scope", "scopes"), ("tool", "tools"),
            ("room", "rooms")) for path in sorted((shipped_folder("plugins") / folder).glob("*.yaml"))]


@pytest.mark.parametrize("kind, path", SHIPPED, ids=lambda value: getattr(value, "stem", value))
def test_shipped_plugin_is_good_and_named_after_its_file(kind, path):
    plugin = load_file(kind, path)
    assert plugin.name == path.stem
    if kind in ("lens", "scope", "tool", "room"):
        assert plugin.values["source"] == "made for this project"


def test_every_kind_ships():
    count = {kind: sum(1 for other, _ in SHIPPED if other == kind) for kind, _ in SHIPPED}
    assert count["lens"] >= 16 and count["scope"] >= 1 and count["tool"] >= 3 and count["room"] >= 2
