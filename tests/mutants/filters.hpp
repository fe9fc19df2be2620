// The filters that faults are put into, each with the plan that is right of it.
#pragma once

#include <functional>
#include <memory>
#include <string>
#include <vector>

#include "tests/mutants/board.hpp"

namespace halflsb::mutants {

struct FilterUnderTest {
    std::string name;
    std::string plan;  ///< signal and filter alone: the cases are the standard set
    std::function<std::unique_ptr<Board>(Fault)> board;
};

const std::vector<FilterUnderTest>& filters();
const FilterUnderTest& filter_named(const std::string& name);

}  // namespace halflsb::mutants
