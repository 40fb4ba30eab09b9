#pragma once
#include <cmath>
namespace pellicle { inline double upper_bound_95(double a, double s){ return std::max(a,0.0)+1.96*s; } }
