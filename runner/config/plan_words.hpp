// The words of a plan that belong to no shape, filter or rule: their tables, for the reader, its messages
// and the reference in docs/plan.md.
#pragma once

#include <cstddef>
#include <string_view>

#include "stimuli/parameter.hpp"

namespace halflsb {

const Recipe& plan_recipe();           ///< the top of the file
const Recipe& signal_recipe();         ///< [signal]
const Recipe& case_recipe();           ///< [[case]]; `labels` and [case.settings] are beside it
const Recipe& case_stimulus_recipe();  ///< [case.stimulus], whatever the shape

/// The kind of [[filter]] that has no design.
inline constexpr std::string_view unknown_kind = "unknown";

inline constexpr std::string_view labels_word = "labels";
inline constexpr std::string_view labels_help =
    "Words of letters, digits, - and _ by which --label selects cases, [\"quick\"] for example.";
inline constexpr std::size_t most_label_characters = 40;

/// [case.settings]: no Parameter has a name that the firmware chose.
inline constexpr std::string_view settings_word = "settings";
inline constexpr std::string_view settings_help =
    "Settings of the firmware for this case, each a name that the board has and a whole number of 32 bits; the others "
    "keep what they had at the start.";
inline constexpr std::size_t most_setting_characters = 24;

}  // namespace halflsb
