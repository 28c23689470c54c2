"""Makes the files in data/ with writers that know nothing of Widefold, and expected.json.

Run with a Python that has numpy, pandas, openpyxl and odfpy; `soffice` makes the .xls.
Expected values are written here from the tables that the files are made of, never by our reader.
"""

import csv, datetime, gzip, io, json, pathlib, random, shutil, subprocess

import numpy as np
import openpyxl
import pandas as pd

import xlsb

HERE = pathlib.Path(__file__).parent / "data"
HERE.mkdir(exist_ok=True)
EXPECTED = {}


def below(x):
    return {"below": x}


def above(x):
    return {"above": x}


def clean(value):
    if isinstance(value, (np.floating, float)):
        return None if np.isnan(value) else float(value)
    if isinstance(value, (np.integer, int)) and not isinstance(value, bool):
        return float(value)
    return value


def expect(file, columns, findings=None, options=None, rows=None, units=None):
    """columns: name -> values; findings: code -> count (the whole list)."""
    EXPECTED[file] = {
        "columns": [{"name": k, "values": [clean(v) for v in vs]} for k, vs in columns.items()],
        "findings": findings or {},
        "options": options or {},
        "rows": rows,
        "units": units or {},
    }


def write(name, text, encoding="utf-8", newline="\n"):
    data = text.replace("\n", newline).encode(encoding)
    (HERE / name).write_bytes(data)


rng = np.random.default_rng(20260301)
n = 6
base = {
    "wheel": [f"K-{i:03d}" for i in range(1, n + 1)],
    "salt": [round(float(v), 3) for v in rng.normal(3, 0.4, n)],
    "fat": [round(float(v), 17) for v in rng.normal(30, 2, n)],
    "cave": ["north", "south", "north", "east, upper", "south", "north"],
}
base["salt"][2] = np.nan
frame = pd.DataFrame(base)


def table(**more):
    return {**base, **more}


# Delimiters, decimal marks, encodings, quoting.
frame.to_csv(HERE / "plain.csv", index=False)
expect("plain.csv", base)

frame.rename(columns={"salt": "Salz µg"}).to_csv(
    HERE / "semicolon.csv", index=False, sep=";", decimal=",", encoding="cp1252")
renamed = {("Salz µg" if k == "salt" else k): v for k, v in base.items()}
expect("semicolon.csv", renamed, {"other-encoding": 1})

frame.to_csv(HERE / "tab-utf16.txt", index=False, sep="\t", encoding="utf-16")
expect("tab-utf16.txt", base, {"other-encoding": 1})

frame.to_csv(HERE / "marked.csv", index=False, encoding="utf-8-sig", lineterminator="\r\n")
expect("marked.csv", base)

frame.to_csv(HERE / "quoted.csv", index=False, quoting=csv.QUOTE_ALL)
expect("quoted.csv", base)

frame.to_csv(HERE / "old-breaks.csv", index=False, lineterminator="\r")
expect("old-breaks.csv", base)

frame.to_csv(HERE / "bars.txt.gz", index=False, sep="|")
expect("bars.txt.gz", base)

broken = table(cave=["a\nb", "a\nb", 'say "x"', "c", "c", "c"])
pd.DataFrame(broken).to_csv(HERE / "line-breaks.csv", index=False)
expect("line-breaks.csv", broken, {"breaks-in-quotes": 2}, rows=[2, 4, 6, 7, 8, 9])

# With an index, and as statistical programs write: one name less than values.
frame.to_csv(HERE / "index.csv")
expect("index.csv", {"column 1": list(range(n)), **base}, {"blank-names": 1})

lines = ['"salt" "fat" "cave"']
for i in range(n):
    salt = "NA" if np.isnan(base["salt"][i]) else repr(base["salt"][i])
    lines.append(f'"{base["wheel"][i]}" {salt} {base["fat"][i]!r} "{base["cave"][i]}"')
write("short-header.txt", "\n".join(lines) + "\n")
expect("short-header.txt", {"row name": base["wheel"], **{k: base[k] for k in ("salt", "fat", "cave")}},
       {"header-short": 1, "missing-words": 1})

np.savetxt(HERE / "no-header.txt", np.array([base["fat"], base["salt"][::-1]]).T)
expect("no-header.txt", {"column 1": base["fat"], "column 2": base["salt"][::-1]},
       {"no-header": 1, "missing-words": 1})

# Around the table.
write("deep.csv", """Cellar light;;;;
Instrument;Probe 2;;;
exported;03.03.2026;;;

;wheel;salt;fat;cave
;;g/100 g;%;
;K-001;3,1;30,25;north
;K-002;2,9;31,5;south

;K-003;;29,75;north
;K-004;3,3;30,0;north

checked by the laboratory;;;;
* second probe from March on;;;;
""")
expect("deep.csv",
       {"wheel": ["K-001", "K-002", "K-003", "K-004"], "salt": [3.1, 2.9, None, 3.3],
        "fat": [30.25, 31.5, 29.75, 30.0], "cave": ["north", "south", "north", "north"]},
       {"lines-above": 3, "units-row": 1, "blank-rows": 1, "lines-below": 2},
       rows=[7, 8, 10, 11], units={"salt": "g/100 g", "fat": "%"})

# Sideways.
wide = frame.drop(columns=["cave"]).set_index("wheel")
wide["class"] = ["yes", "no", "no", "yes", "no", "yes"]
wide = wide[["class", "salt", "fat"]]
for k in range(5):
    wide[f"x{k}"] = rng.normal(size=n)
wide.T.to_csv(HERE / "sideways.csv")
expect("sideways.csv", {"sample": base["wheel"], **{k: list(wide[k]) for k in wide.columns}},
       {"sideways": 1})

axis = pd.DataFrame(rng.normal(size=(12, n)), index=[f"{900 + 2 * k} nm" for k in range(12)],
                    columns=base["wheel"])
axis.to_csv(HERE / "sideways-axis.csv", index_label="wavelength", sep="\t")
expect("sideways-axis.csv", {"sample": base["wheel"], **{k: list(axis.loc[k]) for k in axis.index}},
       {"sideways": 1})

upright = axis.T
upright.to_csv(HERE / "axis.csv", index_label="scan")
expect("axis.csv", {"scan": base["wheel"], **{k: list(upright[k]) for k in upright.columns}})

bare = pd.DataFrame(rng.normal(size=(4, 6)), columns=[900.0, 902.5, 905.0, 907.5, 910.0, 912.5])
bare.insert(0, "id", ["a", "b", "c", "d"])
bare.to_csv(HERE / "numeric-names.csv", index=False)
expect("numeric-names.csv", {str(k): list(bare[k]) for k in bare.columns})

# The four states.
states = {
    "lot": ["a", "b", "c", "d", "e", "f", "g"],
    "iron": ["0.2", "<0.05", "< 0.05", "0.31", ">12", "", "0.12"],
    "zinc": ["1.5", "ND", "n.d.", "2.5", "#N/A", "≤0.1", "3"],
}
pd.DataFrame(states).to_csv(HERE / "states.csv", index=False)
expect("states.csv", {
    "lot": states["lot"],
    "iron": [0.2, below(0.05), below(0.05), 0.31, above(12), None, 0.12],
    "zinc": [1.5, None, None, 2.5, None, below(0.1), 3],
}, {"below-limit": 3, "above-limit": 1, "missing-words": 3})

pd.DataFrame(states).map(lambda v: v.replace(".", ",") if v != "n.d." else v).to_csv(
    HERE / "states-comma.csv", index=False, sep=";")
EXPECTED["states-comma.csv"] = EXPECTED["states.csv"]

codes = {"lot": list("abcdef"), "mass": [1.5, -9, 2.5, 3.5, -9, 2.25], "count": [210, 300, 999, 250, 270, 280]}
pd.DataFrame(codes).to_csv(HERE / "codes.csv", index=False)
expect("codes.csv", codes, {"suspected-code": 3})
EXPECTED["codes.csv with -9"] = {
    **json.loads(json.dumps(EXPECTED["codes.csv"])), "file": "codes.csv",
    "options": {"missing_codes": ["-9"]}, "findings": {"suspected-code": 1, "missing-codes": 2}}
EXPECTED["codes.csv with -9"]["columns"][1]["values"] = [1.5, None, 2.5, 3.5, None, 2.25]

# Identifiers.
ids = {"sensor": ["MAR-2", "SEP-9", "1E-05", "2E3", "B07", "007"], "bay": ["001", "002", "010", "011", "100", "101"],
       "reading": [1.5, 2.5, 3.5, 4.5, 5.5, 6.5]}
pd.DataFrame(ids).to_csv(HERE / "identifiers.csv", index=False)
expect("identifiers.csv", ids, {"date-labels": 2, "exponent-labels": 2, "leading-zeros": 5})

heads = pd.DataFrame([[1.5, 2.5, 3.5, 4.5], [2.0, 3.0, 4.0, 5.0]], columns=["MAR-2", "1E-05", "007", "x"])
heads.insert(0, "id", ["p", "q"])
heads.to_csv(HERE / "odd-heads.csv", index=False)
expect("odd-heads.csv", {k: list(heads[k]) for k in heads.columns})

# Damage to values and names.
write("marks.csv", "id;a;b;c\np;1,5;2.5;1.234,5\nq;2,5;3,5;2,5\nr;3,5;4,5;1 234,5\ns;1,25;12 mg;0,5\n")
expect("marks.csv", {"id": list("pqrs"), "a": [1.5, 2.5, 3.5, 1.25], "b": [None, 3.5, 4.5, None],
                     "c": [None, 2.5, None, 0.5]},
       {"other-decimal-mark": 1, "grouped-digits": 2, "values-with-unit": 1})
EXPECTED["marks.csv with groups"] = {
    **json.loads(json.dumps(EXPECTED["marks.csv"])), "file": "marks.csv",
    "options": {"grouping": "read"}, "findings": {"other-decimal-mark": 1, "values-with-unit": 1}}
EXPECTED["marks.csv with groups"]["columns"][3]["values"] = [1234.5, 2.5, 1234.5, 0.5]

write("names.csv", "id,fat,fat,,pH,\np,1.5,2.5,3.5,7,\nq,2.5,3.5,4.5,6,\n")
expect("names.csv", {"id": ["p", "q"], "fat": [1.5, 2.5], "fat (2)": [2.5, 3.5], "column 4": [3.5, 4.5],
                     "pH": [7, 6]}, {"repeated-names": 1, "blank-names": 1, "blank-columns": 1})

write("text.csv", "id,a,b\np,1.5,2.5\nq,spilled,3.5\nr,2.5,2026-03-02\ns,3.5,1e999\nt,1,2\nu,1,2\nv,1,2\n")
expect("text.csv", {"id": list("pqrstuv"), "a": [1.5, None, 2.5, 3.5, 1, 1, 1], "b": [2.5, 3.5, None, None, 2, 2, 2]},
       {"text-among-numbers": 1, "dates-among-numbers": 1, "numbers-too-large": 1})

write("uneven.csv", "id,a,b\np,1.5,2.5\nq,1.5\nr,1,5,2.5\ns,3.5,4.5\n")
expect("uneven.csv", {"id": list("pqrs"), "a": [1.5, 1.5, None, 3.5], "b": [2.5, None, None, 4.5]},
       {"short-rows": 1, "long-rows": 1})

write("again.csv", "id,a,b\np,1.5,2.5\nid,a,b\nq,1.5,3.5\nmean,1.5,3\n")
expect("again.csv", {"id": ["p", "q", "mean"], "a": [1.5, 1.5, 1.5], "b": [2.5, 3.5, 3]},
       {"repeated-header": 1, "summary-rows": 1})

# Wide: more than the reader looks at to find out how the table lies.
big = pd.DataFrame(rng.normal(size=(7, 3000)), columns=[f"x_{k:04d}" for k in range(3000)])
big.insert(0, "lot", [f"{k:03d}" for k in range(7)])
big["note"] = ["fine", "", "fine", "NA", "late", "fine", "fine"]
big.to_csv(HERE / "wide.csv", index=False, float_format="%.6g")
back = {k: [float(f"{v:.6g}") for v in big[k]] for k in big.columns if k.startswith("x_")}
expect("wide.csv", {"lot": list(big["lot"]), **back, "note": ["fine", None, "fine", None, "late", "fine", "fine"]},
       {"leading-zeros": 7, "missing-words": 1})

# Long: text appears only far below what is looked at.
long = pd.DataFrame({"order": range(5000), "code": ["7"] * 5000, "value": rng.normal(size=5000).round(4)})
long.loc[3000:, "code"] = "B7"
long.loc[4000, "code"] = "1E5"
long.to_csv(HERE / "late-labels.csv.gz", index=False)
expect("late-labels.csv.gz", {k: list(long[k]) for k in long.columns}, {"exponent-labels": 1})

# Workbooks.
book = openpyxl.Workbook()
sheet = book.active
sheet.title = "Read me"
sheet["A1"] = "Wet chemistry of the cellar"
wet = book.create_sheet("Wet chemistry")
wet["B2"] = "laboratory"
wet["C2"] = "measured"
wet.merge_cells("C2:E2")
rows = [
    ["wheel", "salt", "fat", "moisture", "tasted"],
    [None, "g/100 g", "%", "%", None],
    ["K-001", 3.1, 30.25, "41.5", True],
    ["K-002", 2.9, "n.d.", 40.5, False],
    [datetime.datetime(2026, 3, 2), "<0.05", 31.5, 42.25, True],
    [0.00001, 3.3, 28.5, datetime.datetime(2026, 3, 4), True],
    ["007", 3.25, 29.5, "#DIV/0!", False],
]
for r, row in enumerate(rows):
    for c, value in enumerate(row):
        cell = wet.cell(row=3 + r, column=2 + c, value=value)
        if value == "#DIV/0!":
            cell.data_type = "e"
wet["B12"] = "Values below the limit of determination are given with <."
hidden = book.create_sheet("old")
hidden.sheet_state = "hidden"
hidden["A1"] = 1
book.save(HERE / "cellar.xlsx")
wet_columns = {
    "wheel": ["K-001", "K-002", "2026-03-02", "1e-5", "007"],
    "salt": [3.1, 2.9, below(0.05), 3.3, 3.25],
    "fat": [30.25, None, 31.5, 28.5, 29.5],
    "moisture": [41.5, 40.5, 42.25, None, None],
    "tasted": ["true", "false", "true", "true", "false"],
}
wet_findings = {
    "other-sheets": 2, "merged-cells": 1, "units-row": 1, "lines-above": 1, "lines-below": 1,
    "dates-among-labels": 1, "numbers-among-labels": 1, "leading-zeros": 1, "below-limit": 1,
    "missing-words": 1, "numbers-as-text": 1, "dates-among-numbers": 1, "error-values": 1,
}
units = {"salt": "g/100 g", "fat": "%", "moisture": "%"}
expect("cellar.xlsx", wet_columns, wet_findings, rows=[5, 6, 7, 8, 9], units=units)
subprocess.run(["soffice", "--headless", "--convert-to", "xls", "--outdir", str(HERE), str(HERE / "cellar.xlsx")],
               check=True, capture_output=True)
expect("cellar.xls", wet_columns, wet_findings, rows=[5, 6, 7, 8, 9], units=units)
shutil.copy(HERE / "cellar.xlsx", HERE / "cellar.xlsm")
EXPECTED["cellar.xlsm"] = EXPECTED["cellar.xlsx"]

with pd.ExcelWriter(HERE / "two-sheets.ods", engine="odf") as writer:
    frame.to_excel(writer, sheet_name="first", index=False)
    axis.to_excel(writer, sheet_name="scans", index_label="wavelength")
expect("two-sheets.ods", base, {"other-sheets": 1})
EXPECTED["two-sheets.ods scans"] = {**EXPECTED["sideways-axis.csv"], "file": "two-sheets.ods",
                                    "options": {"sheet": "scans"}}

frame.to_excel(HERE / "pandas.xlsx", index=False)
# That writer keeps 16 digits.
sixteen = lambda v: float(f"{v:.16g}") if isinstance(v, float) else v
expect("pandas.xlsx", {k: [sixteen(v) for v in vs] for k, vs in base.items()})


# A workbook of the binary sort, and one that hides a row and a column.
binary = [["id", "lot", "salt", "fat"]] + [
    [f"K-{i:02d}", ["MAR-2", "007", "1E-05"][i % 3], 1.5 + i / 7, "#DIV/0!" if i == 4 else 30.0 + i] for i in range(1, 9)
]
xlsb.write(HERE / "cellar.xlsb", [("Wet chemistry", False, binary), ("old", True, [["id", "x"], ["a", 1.0]])])
column = lambda at: [None if row[at] == "#DIV/0!" else row[at] for row in binary[1:]]
expect("cellar.xlsb", {name: column(at) for at, name in enumerate(binary[0])},
       {"other-sheets": 1, "error-values": 1, "leading-zeros": 3, "exponent-labels": 3, "date-labels": 2})
book = openpyxl.Workbook()
sheet = book.active
for row in [["id", "salt", "fat"]] + [[f"K-{i}", 1.0 + i / 4, 30.0 + i / 8] for i in range(6)]:
    sheet.append(row)
sheet.row_dimensions[4].hidden = True
sheet.column_dimensions["C"].hidden = True
book.save(HERE / "hidden.xlsx")
expect("hidden.xlsx", {"id": [f"K-{i}" for i in range(6)], "salt": [1.0 + i / 4 for i in range(6)],
                       "fat": [30.0 + i / 8 for i in range(6)]}, {"hidden-lines": 2}, rows=[2, 3, 4, 5, 6, 7])


# Two damaged files, seeded, with the place of every damage known.
def damaged(kind):
    dice = random.Random(20260301)
    n, p = 40, 12
    header = ["lot", "batch"] + [f"peak {k + 1}" for k in range(p)]
    body = [[f"L-{i:03d}", "AB"[i % 2]] + [round(dice.gauss(50, 5), 3) for _ in range(p)] for i in range(n)]
    plan = {}

    def hit(code, row, column, value):
        body[row][column] = value
        plan.setdefault(code, []).append([row, column])

    cells = [(r, c) for r in range(2, n - 2) for c in range(3, 2 + p)]
    dice.shuffle(cells)
    take = lambda: cells.pop()
    for code, values in [
        ("below-limit", ["<0.05", "< 0.05", "≤0.05"]), ("above-limit", [">100"]),
        ("missing-words", ["ND", "n.d.", "NA"]), ("other-decimal-mark", ["51,25", "48,5"]),
        ("grouped-digits", ["1,051.5"]), ("values-with-unit", ["52.1 mg"]), ("text-among-numbers", ["spilled", "see note"]),
    ]:
        for value in values:
            hit(code, *take(), value)
    for row in (5, 9):
        hit("suspected-code", row, 2, -9)
    hit("leading-zeros", 3, 0, "007")
    hit("exponent-labels", 4, 0, "1E-05")
    hit("date-labels", 6, 0, "MAR-2")
    hit("date-labels", 7, 0, "SEP-9")
    hit("label-variants", 11, 1, "a ")
    plan["blanks-around"] = [[11, 1]]
    plan["label-variants"] = [[0, 1], [11, 1]]
    header[5] = "peak 3"
    header[6] = ""
    plan["repeated-names"] = [[None, 5]]
    plan["blank-names"] = [[None, 6]]
    if kind == "text":
        hit("error-values", *take(), "#DIV/0!")
        hit("dates-among-numbers", *take(), "02.03.2026")
        hit("numbers-too-large", *take(), "1e999")
    return header, body, plan


header, body, plan = damaged("text")
out = io.StringIO()
writer = csv.writer(out, lineterminator="\n")
out.write("exported from the balance room\n\n")
writer.writerow(header)
for i, row in enumerate(body):
    if i == 20:
        row = row[:-1]
        plan["short-rows"] = [[20, None]]
    if i == 30:
        out.write("\n")
        plan["blank-rows"] = [[None, None]]
    if i == 25:
        writer.writerow(header)
        plan["repeated-header"] = [[None, None]]
    writer.writerow(row)
out.write("\nweighed twice\n")
plan["lines-above"] = plan["lines-below"] = [[None, None]]
write("damaged.csv", out.getvalue())


def survivors(header, body, plan):
    """What a careful reader keeps: all cells that were not damaged, and what is said of the others."""
    names, seen = [], {}
    for at, name in enumerate(header):
        if not name:
            names.append(f"column {at + 1}")
        elif name in seen:
            names.append(f"{name} (2)")
        else:
            names.append(name)
        seen[name] = True
    columns = {}
    for at, name in enumerate(names):
        values = []
        for row in body:
            value = row[at] if at < len(row) else None
            if isinstance(value, str) and at >= 2:
                bare = value.lstrip("<>≤ ")
                if value[0] in "<≤":
                    value = below(float(bare))
                elif value[0] == ">":
                    value = above(float(bare))
                else:
                    value = None
            elif isinstance(value, str):
                value = value.strip()
            values.append(value)
        columns[name] = values
    return columns


cut = [list(row) for row in body]
cut[20] = cut[20][:-1]
expect("damaged.csv", survivors(header, cut, plan), {k: len(v) for k, v in plan.items()})
EXPECTED["damaged.csv"]["damage"] = plan

header, body, plan = damaged("workbook")
book = openpyxl.Workbook()
sheet = book.active
sheet.title = "weighing"
sheet["A1"] = "exported from the balance room"
sheet.merge_cells("A1:D1")
plan["merged-cells"] = plan["lines-above"] = [[None, None]]
for c, name in enumerate(header):
    sheet.cell(row=3, column=1 + c, value=name or None)
for r, row in enumerate(body):
    for c, value in enumerate(row):
        sheet.cell(row=4 + r, column=1 + c, value=value)
sheet.cell(row=4 + 15, column=1, value=datetime.datetime(2026, 3, 2))
body[15][0] = "2026-03-02"
plan["dates-among-labels"] = [[15, 0]]
sheet.cell(row=4 + 16, column=1, value=0.00001)
body[16][0] = "1e-5"
plan["numbers-among-labels"] = [[16, 0]]
cell = sheet.cell(row=4 + 17, column=4, value="#DIV/0!")
cell.data_type = "e"
body[17][3] = "#DIV/0!"
plan["error-values"] = [[17, 3]]
sheet.cell(row=4 + 18, column=4, value=datetime.datetime(2026, 3, 2))
body[18][3] = "date"
plan["dates-among-numbers"] = [[18, 3]]
sheet.cell(row=4 + 19, column=4, value="51.25")
body[19][3] = 51.25
plan["numbers-as-text"] = [[19, 3]]
sheet.cell(row=4 + 42, column=1, value="weighed twice")
plan["lines-below"] = [[None, None]]
other = book.create_sheet("old")
other.sheet_state = "hidden"
other["A1"] = 1
plan["other-sheets"] = [[None, None]]
book.save(HERE / "damaged.xlsx")
expect("damaged.xlsx", survivors(header, body, plan), {k: len(v) for k, v in plan.items()})
EXPECTED["damaged.xlsx"]["damage"] = plan

(HERE / "expected.json").write_text(json.dumps(EXPECTED, ensure_ascii=False, separators=(",", ":")))
