// The words of a rig: their tables, for the reader, its messages and the reference in docs/rig.md.
#pragma once

#include <string_view>

#include "stimuli/parameter.hpp"

namespace halflsb {

const Recipe& board_recipe();     ///< [board]; `isolated` is beside it, no Parameter is true or false
const Recipe& link_recipe();      ///< [link]
const Recipe& wire_recipe();      ///< [wire]
const Recipe& run_recipe();       ///< [run]
const Recipe& commands_recipe();  ///< [commands]; `before_run` is beside it, no Parameter is a list of lists of text

inline constexpr std::string_view isolated_word = "isolated";
inline constexpr std::string_view isolated_help =
    "true says that the outputs are disconnected or harmless, so that a stimulus moves nothing. Required, and refused "
    "when false.";
inline constexpr std::string_view before_run_word = "before_run";
inline constexpr std::string_view before_run_help =
    "Commands before the first case, each a list of arguments, run without a shell in the rig's folder; {image} is the "
    "file of --image.";
inline constexpr std::string_view image_word = "{image}";

}  // namespace halflsb
