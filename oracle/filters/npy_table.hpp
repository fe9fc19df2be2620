// Coefficients in a NumPy array file: taps in one dimension, sections in two, one a row.
#pragma once

#include <cstddef>
#include <span>

#include "oracle/filters/coefficient_table.hpp"

namespace halflsb {

/// Types and shapes as stimuli/npy.hpp has them; the length of the file must be what its header says.
ReadTable read_npy_table(std::span<const std::byte> file);

}  // namespace halflsb
