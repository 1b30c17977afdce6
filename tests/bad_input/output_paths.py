"""Where a report cannot be written. The demo data are invented."""

from __future__ import annotations

from typing import Final

from tests.bad_input.form import CHIP, FOLDER, Bad, Link

OUTPUT_PATHS: Final = (
    Bad(
        "a folder",
        {"main.yaml": CHIP, "out.json": FOLDER},
        "out.json: cannot be written (Is a directory)",
        call="review --save out.json main.yaml",
    ),
    Bad(
        "a folder that is not there",
        CHIP,
        "no/out.json: cannot be written (No such file or directory)",
        call="review --save no/out.json main.yaml",
    ),
    Bad(
        "a folder below a file",
        CHIP,
        "main.yaml/out.json: cannot be written (Not a directory)",
        call="review --save main.yaml/out.json main.yaml",
    ),
    Bad(
        "a link to itself",
        {"main.yaml": CHIP, "out.json": Link("out.json")},
        "out.json: cannot be written (Too many levels of symbolic links)",
        call="review --save out.json main.yaml",
    ),
    Bad(
        "a link into a folder that is not there",
        {"main.yaml": CHIP, "out.json": Link("no/out.json")},
        "out.json: cannot be written (No such file or directory)",
        call="review --save out.json main.yaml",
    ),
    Bad(
        "a full disk",
        {"main.yaml": CHIP, "out.json": Link("/dev/full")},
        "out.json: cannot be written (No space left on device)",
        call="review --save out.json main.yaml",
    ),
    Bad(
        "a name that is too long",
        CHIP,
        f"{'n' * 300}.json: cannot be written (File name too long)",
        call=f"review --save {'n' * 300}.json main.yaml",
    ),
    Bad(
        "the description itself",
        {"main.json": '{"rails": {"avdd": {"nominal": "1.8 V"}}}'},
        "main.json: cannot be written (the report is made from this file)",
        call="review --save main.json main.json",
    ),
    Bad(
        "the description itself, under another name",
        {"main.json": '{"rails": {"avdd": {"nominal": "1.8 V"}}}', "out.json": Link("main.json")},
        "out.json: cannot be written (the report is made from this file)",
        call="review --save out.json main.json",
    ),
    Bad(
        "a file that the description includes",
        {"main.yaml": "include: [part.json]\n" + CHIP, "part.json": "{}"},
        "part.json: cannot be written (the report is made from this file)",
        call="review --save part.json main.yaml",
    ),
    Bad(
        "the file of the settings",
        {"main.yaml": CHIP, "s.json": '{"fail_at": "note"}'},
        "s.json: cannot be written (the report is made from this file)",
        call="review --settings s.json --save s.json main.yaml",
    ),
    Bad(
        "a file of waivers",
        {"main.yaml": CHIP, "tidegate.settings.yaml": "waivers: [w.json]\n", "w.json": "{}"},
        "w.json: cannot be written (the report is made from this file)",
        call="review --save w.json main.yaml",
    ),
    Bad(
        "no ending",
        CHIP,
        "--save report: the form is told by the ending: .txt, .json, .sarif, .md, .html",
        call="review --save report main.yaml",
    ),
    Bad(
        "an ending that is none of ours",
        CHIP,
        "--save report.pdf: the form is told by the ending: .txt, .json, .sarif, .md, .html",
        call="review --save report.pdf main.yaml",
    ),
    Bad(
        "an ending in capitals",
        CHIP,
        "--save report.DOC: the form is told by the ending: .txt, .json, .sarif, .md, .html",
        call="review --save report.DOC main.yaml",
    ),
    Bad(
        "an ending alone",
        CHIP,
        "--save .json: the form is told by the ending: .txt, .json, .sarif, .md, .html",
        call="review --save .json main.yaml",
    ),
    Bad(
        "a folder by its slash",
        CHIP,
        "--save out/: the form is told by the ending: .txt, .json, .sarif, .md, .html",
        call="review --save out/ main.yaml",
    ),
    Bad(
        "one path twice",
        CHIP,
        "--save out.json: named twice; name each file once",
        call="review --save out.json --save out.json main.yaml",
    ),
    Bad(
        "one path twice, spelt differently",
        CHIP,
        "--save ./out.json: named twice (as out.json); name each file once",
        call="review --save out.json --save ./out.json main.yaml",
    ),
    Bad(
        "a picture in a folder that is not there",
        CHIP,
        "no/out.svg: cannot be written (No such file or directory)",
        call="draw main.yaml graph --save no/out.svg",
    ),
    Bad(
        "a picture in place of a folder",
        {"main.yaml": CHIP, "out.svg": FOLDER},
        "out.svg: cannot be written (Is a directory)",
        call="draw main.yaml graph --save out.svg",
    ),
    Bad(
        "a picture in place of the description",
        CHIP,
        "main.yaml: cannot be written (the report is made from this file)",
        call="draw main.yaml graph --save main.yaml",
    ),
)
