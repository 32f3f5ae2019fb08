"""(d) Largest cluster mass of each map: all maps labelled as one stack, masses by bincount."""
import numpy as np
import scipy.ndimage as nd

from twin import read, report, settings

S = settings()
P, F, T = S["maps"], S["frequencies"], S["times"]
z = read("maps.f32", np.float32, (P, F, T))
marked = z > np.float32(S["formingZ"])
structure = np.zeros((3, 3, 3), int)
structure[1] = nd.generate_binary_structure(2, 1)


def work():
    labels, count = nd.label(marked, structure=structure)
    at = labels[marked]
    masses = np.bincount(at, z[marked], minlength=count + 1)
    owner = np.empty(count + 1, int)
    owner[at] = np.repeat(np.arange(P), marked.reshape(P, -1).sum(1))
    largest = np.zeros(P)
    np.maximum.at(largest, owner[1:], masses[1:])
    return largest


report(work)
