#pragma once

#include "pellicle/job/thickness_job.hpp"

namespace pellicle::detail {

/// Findings for a density or a reference ratio that the catalogue contradicts: an atom-density ratio film/substrate
/// outside 0.7–1.4 of the catalogued pair, or a reference ratio that implies one outside 0.5–2 of it.
void note_implausible(const Run& run, const Line& film, const Line& substrate, ThicknessRoute& route);

}  // namespace pellicle::detail
