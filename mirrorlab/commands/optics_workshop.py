"""The verbs ``build`` and ``choose``: panels to cut, and assemblies that close."""

from __future__ import annotations

import argparse
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, Any

from mirrorlab.commands.assembly_words import add_dimensions, dimensions_of
from mirrorlab.commands.output import (
    UsageError,
    add_mirrors,
    add_style,
    add_verb,
    arrangement_of,
    computed,
    print_json,
    print_table,
    say_written,
)

if TYPE_CHECKING:
    from mirrorlab.optics.chooser import Choice
    from mirrorlab.optics.cutjob import CutJob
    from mirrorlab.optics.nesting import Stock
    from mirrorlab.optics.report import Report

BUILD_EXAMPLES = """examples:
  mirrorlab build 90 60 36 --opening 120 --pdf lantern.pdf --csv lantern.csv
  mirrorlab build 60 60 60 --length 200 --opening 55 --joint butted --dxf tube.dxf
  mirrorlab build 30 --length 8in --depth 3.5in --unit in --page Letter --pdf wedge.pdf
  mirrorlab build 90 60 45 --depth 150 --truncated 40 --mirror "household glass" --thickness 4 \\
      --stock 1200x800 --kerf 1 --copies 6 --layout layout.pdf --report job.pdf
"""

CHOOSE_EXAMPLES = """examples:
  mirrorlab choose --images 24 --opening 120
  mirrorlab choose --opening 80mm --kind corner --whole --sort depth
  mirrorlab choose --opening 4in --kind tube --reflectance 0.95 --json
"""

SUFFIXES = {"layout": (".dxf", ".svg", ".pdf"), "report": (".pdf", ".txt")}


def add_build(subparsers: Any) -> None:
    """Add the parser of ``build``."""
    what = "The true shape of every pane, with bevels and joints: cut list, drawings at 1:1, layout."
    parser = add_verb(subparsers, "build", what, BUILD_EXAMPLES)
    add_mirrors(parser)
    add_dimensions(parser)
    joints = parser.add_argument_group("joints")
    joints.add_argument(
        "--joint",
        default="mitred",
        metavar="KIND",
        help="mitred (both edges bevelled to meet), butted (one pane runs past the other) or square "
        "(edges cut square, the groove filled); mitred if not given",
    )
    joints.add_argument(
        "--order",
        default="round",
        help="butted: which runs past: round (each past its next) or first (an earlier letter past "
        "every later one); round if not given",
    )
    joints.add_argument("--gap", default="0", metavar="L", help="room for tape or sealant")
    stock = parser.add_argument_group("stock sheets")
    stock.add_argument("--stock", metavar="WxH", help="size of a stock sheet: 1200x800, 48inx32in")
    stock.add_argument("--margin", default="10", metavar="L", help="kept free along the sheet's edges (10)")
    stock.add_argument("--kerf", default="0", metavar="L", help="what a cut takes away (0)")
    stock.add_argument(
        "--cutting",
        default="straight",
        help="straight (score and snap) or free (saw, jet); straight if not given",
    )
    stock.add_argument("--copies", type=int, default=1, metavar="N", help="assemblies to make (1)")
    files = parser.add_argument_group("files")
    files.add_argument(
        "--dxf", metavar="F", help="drawing at 1:1, with the layout beside it when there is stock"
    )
    files.add_argument("--svg", metavar="F", help="drawing at 1:1")
    files.add_argument("--pdf", metavar="F", help="drawing at 1:1 on printer pages, with a ruler")
    files.add_argument("--csv", metavar="F", help="cut list, one row a side, with its metadata file")
    files.add_argument(
        "--layout", metavar="F", help="layout on stock sheets: .dxf, .svg (1:1) or .pdf (reduced)"
    )
    files.add_argument("--report", metavar="F", help="assembly, figures and cautions: .pdf or .txt")
    files.add_argument("--page", default="A4", help="paper of PDF files: A4, A3 or Letter (A4)")
    files.add_argument("--unit", default="mm", choices=("mm", "in"), help="what lengths are written in (mm)")
    files.add_argument("--title", default="", help="of the drawings")
    parser.add_argument("--json", action="store_true", help="everything as JSON")
    parser.set_defaults(run=run_build)


def run_build(args: argparse.Namespace) -> int:
    """Make the panes; print and write them."""
    from mirrorlab.files.cutsheet_pdf import printable
    from mirrorlab.optics.build import assembly_for
    from mirrorlab.optics.cutjob import make_cut_job
    from mirrorlab.optics.glass import JointSettings
    from mirrorlab.optics.kinds import kind_of
    from mirrorlab.optics.lengths import parse_length
    from mirrorlab.optics.report import job_report

    _check_files(args)
    room = printable(args.page)
    arrangement = arrangement_of(args)
    assembly = assembly_for(arrangement, **dimensions_of(args, kind_of(arrangement)))
    joints = JointSettings.named(args.joint, args.order, parse_length(args.gap, "gap"))
    job = make_cut_job(assembly, joints, _stock(args), args.copies, args.title)
    figures = []
    if args.report:
        from mirrorlab.optics.images import count_images
        from mirrorlab.optics.report import images_section

        figures.append(images_section(count_images(assembly)))
    report = job_report(job, assembly, arrangement.finding(), figures)
    written = _write(args, job, report, room)
    if args.json:
        print_json({**job.to_dict(), "assembly": assembly.to_dict(), "files": written})
    else:
        _print_job(job)
    say_written(written)
    return 0


def _check_files(args: argparse.Namespace) -> None:
    """Refuse what can't be written before anything is."""
    for name, accepted in SUFFIXES.items():
        path = getattr(args, name)
        if path is not None and Path(path).suffix.lower() not in accepted:
            msg = f"--{name} {path}: the name must end in {', '.join(accepted)}"
            raise UsageError(msg)
    if args.layout and not args.stock:
        msg = "--layout: give the size of the stock sheets with --stock, e.g. --stock 1200x800"
        raise UsageError(msg)


def _stock(args: argparse.Namespace) -> Stock | None:
    from mirrorlab.optics.lengths import parse_length
    from mirrorlab.optics.nesting import Cutting, Stock

    if args.stock is None:
        return None
    sizes = args.stock.lower().replace("×", "x").split("x")
    if len(sizes) != 2:
        msg = f"--stock {args.stock}: write width x height, e.g. 1200x800"
        raise UsageError(msg)
    if args.cutting not in tuple(Cutting):
        msg = f"--cutting {args.cutting}: choose {' or '.join(Cutting)}"
        raise UsageError(msg)
    width, height = (parse_length(size, "stock") for size in sizes)
    margin, kerf = parse_length(args.margin, "margin"), parse_length(args.kerf, "kerf")
    return Stock(width, height, margin, kerf, Cutting(args.cutting))


def _write(args: argparse.Namespace, job: CutJob, report: Report, room: tuple[float, float]) -> list[str]:
    """Write the files asked for; returns their names."""
    from mirrorlab.drawing.cutsheet import cut_pages, cut_sheet

    written: list[str] = []

    def put(path: str | None, write: Callable[[str], object]) -> None:
        if path is not None:
            write(path)
            written.append(path)

    if args.dxf:
        from mirrorlab.files.cutsheet_dxf import write_dxf

        sheets = [cut_sheet(job, args.unit)]
        if job.layout is not None:
            from mirrorlab.drawing.stock_sheet import stock_sheet

            sheets.append(stock_sheet(job.layout, f"{job.title}: stock sheets"))
        put(args.dxf, lambda path: write_dxf(sheets, path, args.unit))
    if args.svg:
        from mirrorlab.files.cutsheet_svg import write_svg

        put(args.svg, lambda path: write_svg(cut_sheet(job, args.unit), path))
    if args.pdf:
        from mirrorlab.files.cutsheet_pdf import write_pdf

        put(args.pdf, lambda path: write_pdf([cut_pages(job, room, args.unit)], path, args.page))
    if args.csv:
        from mirrorlab.files.cutlist_csv import write_cut_list

        written += [str(path) for path in write_cut_list(args.csv, job)]
    put(args.layout, lambda path: _write_layout(path, job, room, args.page))
    put(args.report, lambda path: _write_report(path, report, room, args.page))
    return written


def _write_layout(path: str, job: CutJob, room: tuple[float, float], page: str) -> None:
    from mirrorlab.drawing.stock_sheet import stock_sheet

    assert job.layout is not None  # --layout was refused without --stock
    title = f"{job.title}: stock sheets"
    suffix = Path(path).suffix.lower()
    if suffix == ".pdf":
        from mirrorlab.files.cutsheet_pdf import write_pdf

        write_pdf([stock_sheet(job.layout, title, room)], path, page)
    elif suffix == ".svg":
        from mirrorlab.files.cutsheet_svg import write_svg

        write_svg(stock_sheet(job.layout, title), path)
    else:
        from mirrorlab.files.cutsheet_dxf import write_dxf

        write_dxf([stock_sheet(job.layout, title)], path)


def _write_report(path: str, report: Report, room: tuple[float, float], page: str) -> None:
    if Path(path).suffix.lower() == ".pdf":
        from mirrorlab.drawing.report_sheet import report_sheet
        from mirrorlab.files.cutsheet_pdf import write_pdf

        write_pdf([report_sheet(report, room)], path, page)
    else:
        from mirrorlab.files.workshop_report import write_report_text

        write_report_text(report, path)


def _print_job(job: CutJob) -> None:
    """The job for a person."""
    from mirrorlab.optics.cautions import Place
    from mirrorlab.optics.nesting import layout_words
    from mirrorlab.optics.report import panes_table, sides_table

    print(job.title)
    print("\npanes")
    print_table(panes_table(job))
    print("\nsides, counter-clockwise with the mirror side up")
    print_table(sides_table(job))
    for note in job.notes:
        print(f"\n{note}")
    if job.layout is not None:
        print("\nstock")
        for line in layout_words(job.layout):
            print(f"  {line}")
    print("\ncaution")
    for caution in job.cautions(Place.CUT_SHEET):
        print(f"  {caution.title}: {caution.text}")


def add_choose(subparsers: Any) -> None:
    """Add the parser of ``choose``."""
    what = "List every wedge, corner and tube whose images close up, made for one opening."
    parser = add_verb(subparsers, "choose", what, CHOOSE_EXAMPLES)
    parser.add_argument(
        "--opening", required=True, metavar="L", help="longest side of the opening, mm or with a unit"
    )
    parser.add_argument("--images", type=int, metavar="N", help="list those nearest to so many images")
    parser.add_argument("--count", type=int, default=6, metavar="N", help="how many of the nearest (6)")
    parser.add_argument("--length", metavar="L", help="of wedges and tubes (twice the opening)")
    parser.add_argument(
        "--kind", action="append", metavar="KIND", help="wedge, corner or tube; may be repeated"
    )
    parser.add_argument("--whole", action="store_true", help="only one chamber between the mirrors")
    parser.add_argument(
        "--largest", type=int, default=12, metavar="M", help="largest m of angles k·180°/m (12)"
    )
    parser.add_argument(
        "--reflectance", type=float, default=0.9, metavar="R", help="kept by one bounce (0.9)"
    )
    add_style(parser)
    parser.add_argument(
        "--sort",
        metavar="KEY",
        help="images, bright, chambers, angle, depth or area; if not given, by kind, or by nearness to --images",
    )
    parser.add_argument("--json", action="store_true", help="everything as JSON")
    parser.set_defaults(run=run_choose)


def run_choose(args: argparse.Namespace) -> int:
    """List the assemblies that close."""
    from mirrorlab.optics.chooser import SORTS, choices, nearest
    from mirrorlab.optics.lengths import positive_length

    if args.sort is not None and args.sort not in SORTS:
        msg = f"--sort {args.sort}: choose {', '.join(SORTS)}"
        raise UsageError(msg)
    if (args.images is not None and args.images < 1) or args.count < 1:
        msg = "--images and --count: give 1 or more"
        raise UsageError(msg)
    found = choices(
        positive_length(args.opening, "opening"),
        None if args.length is None else positive_length(args.length, "length"),
        args.reflectance,
        args.largest,
        tuple(args.kind or ("wedge", "corner", "tube")),
        args.whole,
    )
    if args.images is not None:
        found = nearest(found, args.images, args.count)
    if args.sort is not None:
        found = tuple(sorted(found, key=SORTS[args.sort]))
    if args.json:
        print_json(
            {"opening_mm": found[0].opening if found else None, "choices": [c.to_dict() for c in found]}
        )
    else:
        _print_choices(found, args.write_as)
    return 0


def _print_choices(found: tuple[Choice, ...], style: str) -> None:
    """The choices for a person, angles in a style of `mirrorlab.angles.write_angle`."""
    import math

    head = (
        "assembly",
        "images",
        "bright",
        "chambers",
        "between",
        "group",
        "angles at the point",
        "depth",
        "panels, mm",
    )
    rows = [head]
    for choice in found:
        closing = choice.closing
        panels = ", ".join(f"{letter} {w:.0f}×{h:.0f}" for letter, w, h in choice.panels)
        rows.append(
            (
                closing.name_in(style),
                "endless" if closing.images is None else str(closing.images),
                str(choice.bright),
                "endless" if closing.order is None else str(closing.order),
                str(closing.chambers),
                closing.symbol,
                " ".join(computed(math.degrees(angle), style, ".2f") for angle in choice.edge_angles) or "–",
                f"{choice.depth:.1f}" if choice.depth else "–",
                panels or choice.problem,
            )
        )
    print_table(rows)
    print("\nimages: seen beside the object; bright: those that keep a tenth of their light or more;")
    print("between: chambers between the mirrors, 1 when the images fit together for every eye;")
    print("angles at the point: of a corner's panels, where they meet")


ADD = {"build": add_build, "choose": add_choose}
