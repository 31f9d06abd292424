"""Every study of examples/ runs to its ranked table."""
import sys
import unittest

from running import ROOT, Place

PROGRAM = sys.argv.pop(1)


class Examples(unittest.TestCase):
    def test_every_example_runs(self):
        studies = sorted(ROOT.glob("examples/*/*.yaml"))
        self.assertGreaterEqual(len(studies), 3)
        for study in studies:
            with self.subTest(study=str(study.relative_to(ROOT))), Place(PROGRAM, study.parent) as place:
                for arguments in (["check", study.name], ["run", study.name, "-o", "out"]):
                    said = place.run(*arguments)
                    self.assertEqual(said.status, 0, said.err)
                self.assertIn("Ranking by held-out loss", said.out)
                self.assertNotIn("failed", said.out)


if __name__ == "__main__":
    unittest.main(verbosity=1)
