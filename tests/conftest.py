"""What several test files share."""

import os
import sys
from pathlib import Path

# Tests run in as many processes as there are cores: more threads than one in each would only fight for them.
# It counts only if it is set before numpy is first imported, which is here.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

import hypothesis

# With --import-mode=importlib the folder of a test is not on the path; sample.py is a plain module beside the tests.
sys.path.insert(0, str(Path(__file__).parent))

# The gate gives the same answer for the same code: properties draw the same examples every time.
hypothesis.settings.register_profile("repeatable", derandomize=True)
hypothesis.settings.load_profile("repeatable")
