"""Complete-linkage clusters of invented correlations, by SciPy (scipy.cluster.hierarchy); Debian's python3-scipy.

    python3 tests/reference/generators/clusters.py > tests/reference/expected/clusters.json
"""
import json
import numpy
import scipy
from scipy.cluster.hierarchy import fcluster, linkage
from scipy.spatial.distance import squareform

random = numpy.random.default_rng(20261201)
cases = []
for size in (2, 5, 12, 30):
    common = random.standard_normal((400, max(1, size // 3)))
    columns = [common[:, j % common.shape[1]] * random.uniform(-1.5, 1.5) + random.standard_normal(400) * 0.6 for j in range(size)]
    matrix = numpy.corrcoef(numpy.array(columns))
    distance = 1 - numpy.abs(matrix)
    steps = linkage(squareform((distance + distance.T) / 2, checks=False), method="complete")
    cases.append({
        "size": size,
        "matrix": [[float(value) for value in line] for line in matrix],
        "heights": [float(step[2]) for step in steps],
        "clusters": {str(t): [int(name) for name in fcluster(steps, 1 - t, criterion="distance")] for t in (0.3, 0.5, 0.7, 0.9)},
    })
print(json.dumps({"source": f"scipy {scipy.__version__}, numpy {numpy.__version__}", "cases": cases}))
