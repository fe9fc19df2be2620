// What explains a run, for people.
#pragma once

#include <string>
#include <string_view>

#include "runner/report/text_style.hpp"
#include "runner/world/explanation.hpp"

namespace halflsb {

/// All that explain prints behind the name of the program.
std::string explanation_text(const Explanation& explanation, const TextStyle& style);

/// A sentence for each group of channels, for the end of a failing check; "" where there was nothing to compare with.
std::string explained_lines(const Explanation& explanation, const TextStyle& style);

/// The lines of a plan that say the arithmetic of the chain: [arithmetic] where all stages say the same, otherwise
/// [filter.arithmetic] with the number of its stage as a comment.
std::string arithmetic_lines(const FilterChain& chain);

/// What explains one group of channels: the sentence, where, what to look at, the evidence.
std::string channel_lines(const ExplainedChannels& one, const TextStyle& style);

}  // namespace halflsb
