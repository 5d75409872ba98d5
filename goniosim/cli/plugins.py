"""`goniosim plugins list | check | explain`."""

from __future__ import annotations

import argparse
from pathlib import Path
from typing import Any

from .. import load_scene
from ..catalogue.checking import did_you_mean
from ..catalogue.explaining import explained, explained_text, plugin_text
from ..catalogue.kinds import KINDS, PLUGIN_KINDS
from ..catalogue.listing import check_all, listed
from ..catalogue.search import Catalogue, load_file
from ..cautions import CAUTION
from ..errors import BadInput, ExitCode, Misuse
from .options import add_common_options, print_caution, print_json

USUAL_EYE = "adult-open"


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Arguments of the command."""
    actions = parser.add_subparsers(dest="action", required=True, metavar="list|check|explain")
    listing = actions.add_parser("list", help="every plugin found, and where it is from")
    listing.add_argument("kind", nargs="?", choices=PLUGIN_KINDS, help="one kind only")
    checking = actions.add_parser("check", help="check files, folders, or plugins by name")
    checking.add_argument("what", nargs="+", metavar="FILE_OR_FOLDER_OR_NAME")
    explaining = actions.add_parser("explain", help="every key of a kind, or one plugin")
    explaining.add_argument("what", metavar="KIND_OR_NAME")
    for action in (listing, checking, explaining):
        add_common_options(action)


def run(args: argparse.Namespace) -> int:
    """Run the command; returns the exit code."""
    catalogue = Catalogue(args.plugin_folders, Path.cwd())
    return {"list": _list, "check": _check, "explain": _explain}[args.action](args, catalogue)


def _list(args: argparse.Namespace, catalogue: Catalogue) -> int:
    rows, broken = listed(catalogue, [args.kind] if args.kind else list(PLUGIN_KINDS))
    if args.json:
        print_json({"caution": CAUTION, "plugins": rows, "broken_packages": broken})
        return ExitCode.DONE
    for kind in dict.fromkeys(row["kind"] for row in rows):
        print(KINDS[kind].folder)
        of_kind = [row for row in rows if row["kind"] == kind]
        width = max(len(row["name"]) for row in of_kind)
        for row in of_kind:
            print(f"  {row['name']:<{width}}  {_row_words(row)}")
    for package in broken:
        print(f"broken: {package}. Other plugins are unaffected.")
    print_caution()
    return ExitCode.DONE


def _row_words(row: dict[str, Any]) -> str:
    state = f"BROKEN: {row['cause']} Details: goniosim plugins check {row['file']}" if row["broken"] else row["title"]
    hidden = ", hidden by one found earlier" if row["hidden"] else ""
    return f"{state}  ({row['from']}{hidden})"


def _check(args: argparse.Namespace, catalogue: Catalogue) -> int:
    results = [_standing(result, args.plugin_folders) for result in check_all(args.what, catalogue)]
    failed = [result for result in results if not result["ok"]]
    if args.json:
        print_json({"caution": CAUTION, "checked": results})
    else:
        for result in results:
            print(f"{result['file']}: {result['kind']} ok" if result["ok"] else result["report"])
        print(f"{len(results)} checked, {len(failed)} with problems")
        print_caution()
    return ExitCode.BAD_INPUT if failed else ExitCode.DONE


def _standing(result: dict[str, Any], plugin_folders: list[str]) -> dict[str, Any]:
    """A good lens file put on the usual eye: its faces must close its bodies and clear the cornea."""
    if not result["ok"] or result["kind"] != "lens":
        return result
    definition = load_file("lens", Path(result["file"])).values
    try:
        load_scene({"goniosim": "scene", "schema": 1, "name": "check", "eye": {"use": USUAL_EYE, "side": "right"},
                    "lens": {"definition": definition}, "target": {"structure": "pigmented-meshwork", "clock": 3}},
                   plugin_folders)
    except BadInput as error:
        report = f"{result['file']} does not stand on the eye {USUAL_EYE}: {error.report()}"
        return {**result, "ok": False, "report": report, "faults": [vars(fault) for fault in error.faults]}
    return result


def _explain(args: argparse.Namespace, catalogue: Catalogue) -> int:
    if args.what in KINDS:
        text, values = explained_text(args.what), explained(args.what)
    else:
        plugins = [plugin for kind in PLUGIN_KINDS if (plugin := catalogue.load(kind, args.what))]
        if not plugins:
            _no_such(args.what, catalogue)
        text = "\n\n".join(plugin_text(plugin) for plugin in plugins)
        values = {"plugins": [{"kind": plugin.kind, "file": plugin.document.where, **plugin.values}
                              for plugin in plugins]}
    if args.json:
        print_json({"caution": CAUTION, **values})
    else:
        print(text)
        print_caution()
    return ExitCode.DONE


def _no_such(word: str, catalogue: Catalogue) -> None:
    names = [entry.name for kind in PLUGIN_KINDS for entry in catalogue.entries(kind)]
    near = did_you_mean(word, [*KINDS, *names])
    raise Misuse(f"no kind and no plugin named '{word}'. Kinds: {', '.join(KINDS)}. {near}".rstrip())
