"""Where the state of a path lies in its work arrays, and the names of what is counted.

A thread has one set of work arrays: `reals` (N_SLOTS, N_REALS), `whole` (N_SLOTS, N_WHOLE) and `sets`
(N_SLOTS, 2). A slot holds a path that is followed, or a branch that waits; `lanes` (4, N_LANE_REALS) belongs to the
whole sample.
"""

from __future__ import annotations

N_SLOTS = 34  # a branch for each of up to 32 splits, the path itself and one to spare

# reals: one row a slot
ORIGIN = 0  # 3: where the ray starts
DIRECTION = 3  # 3: unit
TIME = 6  # within the shutter, 0 to 1
AFTER = 7  # hits up to this distance have been dealt with
MIS = 8  # sum of the lanes' density ratios before the last scattering over its density; 0 after a smooth one
AXIS = 9  # 3: unit, across the ray: the reference of the Stokes parameters
ROW = 12  # 16: first row of the Mueller product, four lanes of four
RATIO = 28  # 4: density of the path for each lane's wavelength over the hero's
START = 32  # what the path carried when it became a branch
N_REALS = 33

# whole: one row a slot
INSTANCE_AFTER = 0
PRIMITIVE_AFTER = 1
SKIP_INSTANCE = 2
SKIP_PRIMITIVE = 3
BRANCH = 4  # names the branch, for its sample dimensions
DEPTH = 5  # events so far
SPLITS = 6  # interfaces at which both branches may still be followed
KIND = 7  # which kind of light it finds
ROUGH_SEEN = 8  # 1 once a rough, diffuse or scattering vertex has been met
SMOOTH_SINCE = 9  # 1 once a smooth interface has been met after that
INTERFACES = 10
SOLO = 11  # 1 when only the hero is left
N_WHOLE = 12

# lanes: one row a wavelength
LANE_NM = 0
LANE_X = 1  # 3: what a unit of radiance adds to X, Y, Z [cd/m2]
LANE_LINE = 4  # column of line radiance, or -1
LANE_BIN = 5  # spectral bin, or -1
LANE_BIN_WEIGHT = 6
N_LANE_REALS = 7

# kinds of light: which layer a path's light is added to
KINDS = ("sky", "direct", "reflected", "transmitted")
SKY, DIRECT, REFLECTED, TRANSMITTED = range(4)

# tally
SEGMENTS = 0
SAMPLES = 1
NON_FINITE = 2
SATURATED = 3
SET_OVERFLOW = 4
CAPPED = 5
CAP_LOST = 6  # power that cut paths still carried, in 2^-32 of a path's at the camera
LEFT_OUT = 7
UNMATCHED = 8
N_TALLY = 9

# settings: whole numbers that a round is rendered with
SET_SEED = 0
SET_REPLICATE = 1
SET_INDEX = 2
SET_SPLITS = 3
SET_MAX_INTERFACES = 4
N_SETTINGS = 5

SMOOTH_BELOW = 0.02  # roughness under which an interface, or a mirror, counts as smooth
MAX_DEPTH = 100_000  # events of any kind before a path is cut off; the power lost is counted

# vertex: what a rough scattering needs to know of where it happens, one array a block of pixels
FRAME = 0  # 9: tangent, bitangent, shading normal (on the side of the ray)
VIEW = 9  # 3: direction back along the ray, in that frame
TOP = 12  # see surfaces.top_of
ALPHA = 13
WET = 14
IS_INTERFACE = 15  # 1 at a rough clear boundary, 0 on an opaque surface
REFLECTANCE = 16  # 4 lanes
INDEX_HERE = 20  # 4 lanes: index on the ray's side
INDEX_BEYOND = 24  # 4 lanes
POINT = 28  # 3
TRUE_NORMAL = 31  # 3: on the side of the ray
POINT_ERROR = 34
N_VERTEX = 36

# what a sample dimension is for
FILTER_POINT, LENS_POINT, TIME_AND_WAVELENGTH = 0, 1, 2
SCATTER_POINT, LOBE_POINT, SUN_POINT, SKY_POINT, AREA_POINT, BRANCH_POINT = 3, 4, 5, 6, 7, 8
