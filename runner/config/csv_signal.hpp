// The text half of signal_file.hpp. Inside this room only.
#pragma once

#include <string>
#include <variant>

#include "runner/config/signal_file.hpp"
#include "runner/config/source_text.hpp"

namespace halflsb {

std::variant<SignalFile, std::string> read_csv_signal(const SignalFileName& name, const SourceText& source);

}  // namespace halflsb
