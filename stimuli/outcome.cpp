#include "stimuli/outcome.hpp"

namespace halflsb {

std::string to_text(const Error& error) {
    std::string text;
    if (!error.place.empty()) text += error.place + ": ";
    text += error.problem;
    if (!error.remedy.empty()) text += "\n  " + error.remedy;
    return text;
}

}  // namespace halflsb
