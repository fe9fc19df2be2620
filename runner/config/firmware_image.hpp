// The identity of a firmware image: the build-id note that the linker put into its ELF file
// (System V ABI, "Note Section"; GNU ld, --build-id).
#pragma once

#include <string>
#include <string_view>

#include "runner/world/files.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

/// Largest image that is read; with debugging information a firmware has some MB.
inline constexpr std::size_t largest_image_bytes = std::size_t{256} << 20;

/// Lower-case hex of the NT_GNU_BUILD_ID note, from PT_NOTE segments or SHT_NOTE sections of a 32- or
/// 64-bit ELF of either byte order. Every offset is checked against the size. Errors are of kind input
/// with an empty place: no ELF, cut off, no note.
Outcome<std::string> build_id_of(std::string_view elf_bytes);

/// The same of a file; the place is its path.
Outcome<std::string> read_build_id(const std::string& path, const Files& files);

}  // namespace halflsb
