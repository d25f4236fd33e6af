"""How many small faults in the core the tests of their package notice.

    python -m tests.trials.mutate PACKAGE [COUNT] [SEED]

takes COUNT mutants of core/PACKAGE (60 if left out) by lot out of all that cosmic-ray knows to make (operators,
comparisons, numbers, not, and, or, loops), puts each into a copy of the project, and runs tests/PACKAGE and
tests/outside there until the first failure. It prints each survivor as a difference, and the score. Mutants that
change nothing but annotations, docstrings or decorators are not drawn. Needs cosmic-ray, which no environment of the
project holds: `pip install cosmic-ray`, or put it on PYTHONPATH."""

import ast
import difflib
import os
import random
import shutil
import subprocess
import sys
import tempfile
import time
from pathlib import Path

from cosmic_ray.mutating import MutationVisitor
from cosmic_ray.operators.provider import OperatorProvider
from parso import parse

ROOT = Path(__file__).resolve().parents[2]
LEFT_OUT = {"RemoveDecorator", "VariableReplacer", "VariableInserter", "ExceptionReplacer"}
LONGEST_S = 900.0
COPIED = ("core", "mobileapp", "tests", "buildspec", "pyproject.toml", "README.md", "DEVELOPERS.md")


class Bare(ast.NodeTransformer):
    """What a module does: without annotations and docstrings."""

    def visit_arg(self, node):
        node.annotation = None
        return node

    def visit_AnnAssign(self, node):
        self.generic_visit(node)
        node.annotation = ast.Constant(None)
        return node

    def visit_FunctionDef(self, node):
        self.generic_visit(node)
        node.returns = None
        return node

    def visit_Expr(self, node):
        return ast.Pass() if isinstance(node.value, ast.Constant) else self.generic_visit(node)


def meaning(source):
    return ast.dump(Bare().visit(ast.parse(source)))


def mutants_of(path):
    """All mutants of a file that mean something else: (name of the operator, mutated source)."""
    source = path.read_text("utf-8")
    was = meaning(source)
    provider = OperatorProvider()
    for name in sorted(set(provider) - LEFT_OUT):
        operator = provider[name]()
        occurrence = 0
        while True:
            visitor = MutationVisitor(occurrence, operator)
            mutated = visitor.walk(parse(source)).get_code()
            if not visitor.mutation_applied:
                break
            occurrence += 1
            try:
                if meaning(mutated) != was:
                    yield name, mutated
            except SyntaxError:
                continue


def survives(tree, package):
    """Whether all tests of the package, then those against the outside world, pass in the tree."""
    words = [sys.executable, "-m", "pytest", "-x", "-q", "-p", "no:cacheprovider", f"tests/{package}", "tests/outside"]
    environment = os.environ | {"PYTHONDONTWRITEBYTECODE": "1", "HYPOTHESIS_STORAGE_DIRECTORY": str(tree / "found")}
    try:
        done = subprocess.run(words, cwd=tree, env=environment, capture_output=True, timeout=LONGEST_S, check=False)
    except subprocess.TimeoutExpired:
        return False
    return done.returncode == 0


def main(package, count, seed):
    files = sorted((ROOT / "core" / package).glob("*.py"))
    all_mutants = [(path, name, source) for path in files for name, source in mutants_of(path)]
    drawn = random.Random(seed).sample(all_mutants, min(count, len(all_mutants)))
    print(f"core/{package}: {len(all_mutants)} mutants, {len(drawn)} drawn with seed {seed}", flush=True)
    killed, begin = 0, time.monotonic()
    with tempfile.TemporaryDirectory() as folder:
        tree = Path(folder)
        for name in COPIED:
            copy = shutil.copytree if (ROOT / name).is_dir() else shutil.copy
            copy(ROOT / name, tree / name)
        if not survives(tree, package):
            raise SystemExit(f"The tests of {package} fail without any mutant; mend them first.")
        for done, (path, name, source) in enumerate(drawn, 1):
            place = tree / path.relative_to(ROOT)
            sound = place.read_text("utf-8")
            place.write_text(source, encoding="utf-8")
            alive = survives(tree, package)
            place.write_text(sound, encoding="utf-8")
            killed += not alive
            if alive:
                lines = difflib.unified_diff(sound.splitlines(), source.splitlines(), lineterm="", n=0)
                told = "\n    ".join(line for line in lines if not line.startswith(("---", "+++")))
                print(f"survived, {done}: {path.relative_to(ROOT)}, {name}\n    {told}", flush=True)
    spent = time.monotonic() - begin
    print(f"core/{package}: {killed} of {len(drawn)} noticed, {100 * killed / len(drawn):.0f} % ({spent:.0f} s)")


if __name__ == "__main__":
    numbers = [int(word) for word in sys.argv[2:]]
    main(sys.argv[1], *(numbers + [60, 1][len(numbers) :]))
