#include "runner/world/comparison.hpp"

#include <algorithm>

namespace halflsb {

bool ComparedCase::differs() const {
    return std::any_of(channels.begin(), channels.end(), [](const ComparedChannel& one) { return one.different > 0; });
}

bool Comparison::differs() const {
    return std::any_of(cases.begin(), cases.end(), [](const ComparedCase& one) { return one.differs(); });
}

}  // namespace halflsb
