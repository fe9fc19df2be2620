// The names of the sample formats, as the choices of a Parameter.
#pragma once

#include <string_view>
#include <vector>

#include "stimuli/sample_format.hpp"

namespace halflsb {

/// In the order of sample_formats().
inline std::vector<std::string_view> format_names() {
    std::vector<std::string_view> names;
    for (const SampleFormat& format : sample_formats()) names.push_back(format.name);
    return names;
}

}  // namespace halflsb
