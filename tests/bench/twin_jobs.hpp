// Twins to be timed against the double-precision reference of the same filter.
#pragma once

#include <functional>
#include <memory>
#include <span>
#include <string>
#include <vector>

#include "oracle/arithmetic/twin.hpp"

namespace halflsb {

struct TwinJob {
    std::string name;  ///< "twin-" and the name of the reference's job
    std::function<std::unique_ptr<Twin>()> make;
};

std::vector<TwinJob> twin_jobs();

std::vector<Code> q15_codes(std::span<const double> values);

}  // namespace halflsb
