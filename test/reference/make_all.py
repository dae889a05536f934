"""Recomputes every reference file beside this script (npm run reference)."""

import glob
import os
import subprocess
import sys

here = os.path.dirname(os.path.abspath(__file__))
for script in sorted(glob.glob(os.path.join(here, "make_*.py"))):
    if os.path.basename(script) != "make_all.py":
        subprocess.run([sys.executable, "-B", script], check=True)
