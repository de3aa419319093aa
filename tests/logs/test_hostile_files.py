"""Files made to harm: refused with one message, before memory or time goes into them."""

import gzip
import tracemalloc

import pytest

from forensics.errors import LogError
from forensics.logs import packed, xml_walk
from forensics.logs.packed import open_bytes
from forensics.logs.registry import read_raw

LAUGHS = "".join(f'<!ENTITY l{i} "{f"&l{i - 1};" * 10}">' for i in range(1, 10))
LOG = (
    "<logs><log><logCurveInfo><mnemonic>{0}</mnemonic></logCurveInfo><logData><data>1</data></logData></log>"
    "</logs>"
)


def every(name):
    return bool(name)


def refusal(path, data):
    path.write_bytes(data if isinstance(data, bytes) else data.encode())
    tracemalloc.start()
    with pytest.raises(LogError) as caught:
        read_raw(path, every)
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    assert str(path) in str(caught.value)
    assert peak < 3e8
    return str(caught.value)


@pytest.mark.parametrize(
    "doctype",
    [
        f'<!DOCTYPE logs [<!ENTITY l0 "ha">{LAUGHS}]>',
        '<!DOCTYPE logs [<!ENTITY x SYSTEM "file:///etc/hostname">]>',
        '<!DOCTYPE logs SYSTEM "http://127.0.0.1:9/logs.dtd">',
        "<!DOCTYPE logs>",
    ],
    ids=["billion laughs", "external entity", "external subset", "bare"],
)
@pytest.mark.parametrize("encoding", ["utf-8", "utf-16"])
def test_a_document_type_is_refused_in_any_encoding(tmp_path, doctype, encoding):
    text = f'<?xml version="1.0" encoding="{encoding}"?>{doctype}{LOG.format("&x;")}'
    assert "document type" in refusal(tmp_path / "x.xml", text.encode(encoding))


def test_an_entity_that_nobody_declared_is_refused(tmp_path):
    assert "XML is broken: undefined entity" in refusal(tmp_path / "x.xml", LOG.format("&x;"))


def test_endless_nesting_is_refused(tmp_path):
    assert "deep" in refusal(tmp_path / "x.xml", "<logs>" + "<a>" * 100_000)


def test_endless_text_is_refused(tmp_path, monkeypatch):
    monkeypatch.setattr(xml_walk, "LONGEST", 2**16)
    assert "characters" in refusal(tmp_path / "x.xml", LOG.format("x" * 200_000))


@pytest.mark.parametrize(
    ("name", "head"),
    [
        ("x.csv.gz", b"time,bit_depth [m],hookload [kN]\n" + b"2031-05-14T10:00:00Z,2000,1200\n" * 40),
        ("x.las.gz", b"~V\n VERS. 2.0 :\n~C\n TIME.S :\n HKLD.KN :\n~A\n"),
        ("x.xml.gz", b"<logs><log>"),
        ("x.wits.gz", b"&&\n01082000\n!!\n"),
    ],
)
def test_a_gzip_bomb_is_refused_in_any_format(tmp_path, name, head, monkeypatch):
    monkeypatch.setattr(packed, "SMALL", 2**17)
    monkeypatch.setattr(packed, "MOST_TIMES", 20)
    filler = head[-32:] if "csv" in name else b"<a></a>\n" if "xml" in name else b" " * 300 + b"\n"
    bomb = head + filler * (1_000_000 // len(filler))
    assert "packed file holds more than" in refusal(tmp_path / name, gzip.compress(bomb))


def test_a_packed_log_of_usual_density_is_read_whole(tmp_path, monkeypatch):
    monkeypatch.setattr(packed, "SMALL", 2**10)
    text = "".join(f"{i},{i * 7919 % 1000}\n" for i in range(20_000)).encode()
    (tmp_path / "x.gz").write_bytes(gzip.compress(text))
    with open_bytes(tmp_path / "x.gz") as file:
        assert file.read() == text


def test_a_damaged_parquet_file_is_refused(tmp_path):
    assert "Parquet file can't be read" in refusal(tmp_path / "x.parquet", b"PAR1" + b"\x00" * 500 + b"PAR1")


@pytest.mark.parametrize("name", ["x.csv", "x.las"])
def test_one_endless_line_is_refused(tmp_path, name):
    words = refusal(tmp_path / name, b"1,2," * 5_000_000)
    assert "no line break" in words or "one line is longer" in words


def test_a_million_columns_are_refused(tmp_path):
    data = "a," * 1_000_000 + "\n" + ("1," * 1_000_000 + "\n") * 2
    assert "no line break" in refusal(tmp_path / "x.csv", data)


@pytest.mark.parametrize("packed_up", [False, True])
@pytest.mark.parametrize("name", ["x.csv", "x.las"])
@pytest.mark.parametrize("before", [0, 70, 5000])
def test_a_row_without_end_after_good_ones_is_refused(tmp_path, monkeypatch, name, packed_up, before):
    monkeypatch.setattr(packed, "LONGEST_LINE", 2**18)
    monkeypatch.setattr(packed, "FEW", 2**8)
    head = "~V\n VERS. 2.0 :\n~C\n TIME.S :\n HKLD.KN :\n~A\n" if name == "x.las" else "time,HKLD [kN]\n"
    mark = " " if name == "x.las" else ","
    rows = "".join(f"{i}{mark}1200\n" for i in range(60 + before))
    data = (head + rows + f"7{mark}" * 300_000 + "\n" + rows).encode()
    path = tmp_path / (f"{name}.gz" if packed_up else name)
    assert "one line is longer" in refusal(path, gzip.compress(data) if packed_up else data)


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
def test_ordinary_rows_are_never_taken_for_one(tmp_path, monkeypatch, end):
    monkeypatch.setattr(packed, "LONGEST_LINE", 2**16)
    path = tmp_path / "x.csv"
    path.write_bytes(end.join(["a,b", *(f"{i},{'9' * 200}" for i in range(4000))]).encode())
    packed.refuse_endless_line(path)
