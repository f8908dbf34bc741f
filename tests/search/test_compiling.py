"""Where compiled kernels are kept."""

from pathlib import Path

import pytest

from routing.search import compiling


@pytest.fixture
def no_own_folder(monkeypatch):
    monkeypatch.delenv("NUMBA_CACHE_DIR", raising=False)
    return monkeypatch


def test_an_own_folder_is_respected(monkeypatch, tmp_path):
    monkeypatch.setenv("NUMBA_CACHE_DIR", str(tmp_path))
    assert compiling.cache_folder() == tmp_path


def test_a_folder_that_cannot_be_written_is_replaced(no_own_folder, tmp_path):
    blocked = tmp_path / "file"
    blocked.write_text("")
    no_own_folder.setattr(compiling.platformdirs, "user_cache_dir", lambda *a, **k: str(blocked / "below"))
    assert not str(compiling.cache_folder()).startswith(str(blocked))


def test_the_folder_follows_the_kernel_sources(no_own_folder, tmp_path):
    no_own_folder.setattr(compiling.platformdirs, "user_cache_dir", lambda *a, **k: str(tmp_path))
    before = compiling.cache_folder()
    copies = tmp_path / "source"
    copies.mkdir()
    for name in compiling._KERNEL_FILES:
        (copies / name).write_text(Path(compiling._HERE, name).read_text() + "# edited\n")
    no_own_folder.setattr(compiling, "_HERE", copies)
    assert compiling.cache_folder() != before


def test_ready_only_once_compiled(monkeypatch, tmp_path):
    monkeypatch.setenv("NUMBA_CACHE_DIR", str(tmp_path))
    monkeypatch.delenv("NUMBA_DISABLE_JIT", raising=False)
    assert not compiling.kernels_ready()
    monkeypatch.setenv("NUMBA_DISABLE_JIT", "1")
    assert compiling.kernels_ready()
