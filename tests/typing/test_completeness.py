"""Every type that the SDK shows to a caller is known to a type checker."""

import json
import os
import shutil
import subprocess
import sys
import sysconfig
import venv
from pathlib import Path

ROOT = Path(__file__).parents[2]


def test_every_public_type_is_known(tmp_path: Path) -> None:
    """The checker asks for an installed package, so that is what it gets; what it rests on comes from beside it."""
    venv.create(tmp_path / "env")
    packages = next((tmp_path / "env/lib").glob("python*/site-packages"))
    shutil.copytree(ROOT / "sdk/src/burntally", packages / "burntally")
    (packages / "beside.pth").write_text(sysconfig.get_paths()["purelib"], encoding="utf-8")
    checker = Path(sys.executable).parent / "basedpyright"
    done = subprocess.run(
        [checker, "--verifytypes", "burntally", "--ignoreexternal", "--outputjson"],
        cwd=tmp_path,
        # For this question the checker asks the first interpreter on the path where packages are.
        env={**os.environ, "PATH": f"{tmp_path / 'env/bin'}:{os.environ['PATH']}"},
        check=False,
        capture_output=True,
        text=True,
    )
    told = json.loads(done.stdout)["typeCompleteness"]
    unknown = [row["name"] for row in told["symbols"] if row["isExported"] and not row["isTypeKnown"]]
    assert (unknown, told["completenessScore"]) == ([], 1.0)
