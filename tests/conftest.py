"""What several test files share."""

import sys
from pathlib import Path

# With --import-mode=importlib the folder of a test is not on the path; sample.py is a plain module beside the tests.
sys.path.insert(0, str(Path(__file__).parent))
