#include "runner/world/cautions.hpp"

namespace halflsb {

const std::vector<std::string_view>& cautions() {
    static const std::vector<std::string_view> sentences = {
        "A stimulus can move what is wired to the board: disconnect actuators, mains, patients and loads first.",
        "isolated = true in the rig file is a statement by the person who wired it; without it nothing is streamed.",
        "A passing report is evidence about the filter on the tested unit at its injection point, not a safety "
        "approval.",
        "Local codes and licensed practice decide whether a device may be used.",
    };
    return sentences;
}

std::string_view evidence_caution() {
    return "evidence about the filter on the tested unit at its injection point, not a safety approval";
}

}  // namespace halflsb
