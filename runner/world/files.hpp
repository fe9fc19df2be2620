// Files, as a seam: everything that reads or writes takes a Files, so tests keep theirs in memory
// (tests/support/fake_files.hpp).
//
// Reading takes regular files only: a pipe or a device is never opened, so nothing hangs on one and no
// serial port is toggled. Writing is write-then-rename: after a crash a file is the old one or the new
// one, never half of it.
#pragma once

#include <cstddef>
#include <cstdint>
#include <memory>
#include <span>
#include <string>

#include "stimuli/outcome.hpp"

namespace halflsb {

/// A file that grows while a case runs. Until commit() it stands beside its final name as NAME.part;
/// when it is discarded, or destroyed without commit(), that is removed and the final name untouched.
class OutputFile {
public:
    virtual ~OutputFile() = default;
    /// Appends. After an error the file is only good for discarding.
    virtual Outcome<void> write(std::span<const std::byte> bytes) = 0;
    /// Overwrites the first bytes, which must have been written: for a header that states the length.
    virtual Outcome<void> patch_start(std::span<const std::byte> bytes) = 0;
    /// Reads what was written, from byte `offset` on; all of it must be there.
    virtual Outcome<void> read_back(std::size_t offset, std::span<std::byte> bytes) = 0;
    /// Another final name in the same folder. Before commit().
    virtual void rename(const std::string& path) = 0;
    /// Flushes to the disk and takes the final name. Only once, nothing after it.
    virtual Outcome<void> commit() = 0;
    virtual void discard() = 0;
};

/// A file that is read in pieces, so that its size costs no memory.
class InputFile {
public:
    virtual ~InputFile() = default;
    virtual std::int64_t size_bytes() const = 0;
    /// From byte `offset` on; all of it must be there.
    virtual Outcome<void> read(std::int64_t offset, std::span<std::byte> bytes) = 0;
};

/// Errors of reading are of kind input, errors of writing of kind output; the place is the path.
class Files {
public:
    virtual ~Files() = default;

    /// The bytes of a regular file of at most `cap_bytes`; a larger one is refused unread.
    virtual Outcome<std::string> read(const std::string& path, std::size_t cap_bytes) const = 0;
    /// The same for a path given by someone who may only see what lies under `root`: relative, and
    /// under `root` still after every symbolic link of both was followed.
    virtual Outcome<std::string> read_under_root(const std::string& root, const std::string& relative_path,
                                                 std::size_t cap_bytes) const = 0;
    /// A regular file of any size, to be read in pieces.
    virtual Outcome<std::unique_ptr<InputFile>> open_input(const std::string& path) const = 0;
    /// Whether there is anything of that name, a folder or a dangling link included.
    virtual bool exists(const std::string& path) const = 0;
    /// The path with every symbolic link followed and made absolute; "" when there is no such thing.
    virtual std::string resolved(const std::string& path) const = 0;

    /// Replaces the whole file; on the disk before its name is taken.
    virtual Outcome<void> write(const std::string& path, std::span<const std::byte> bytes) = 0;
    Outcome<void> write(const std::string& path, const std::string& bytes) {
        return write(path, std::as_bytes(std::span(bytes)));
    }
    /// The folder and those above it; existing ones are fine.
    virtual Outcome<void> make_directories(const std::string& path) = 0;
    virtual Outcome<std::unique_ptr<OutputFile>> open_output(const std::string& path) = 0;
};

class DiskFiles final : public Files {
public:
    using Files::write;
    Outcome<std::string> read(const std::string& path, std::size_t cap_bytes) const override;
    Outcome<std::string> read_under_root(const std::string& root, const std::string& relative_path,
                                         std::size_t cap_bytes) const override;
    Outcome<std::unique_ptr<InputFile>> open_input(const std::string& path) const override;
    bool exists(const std::string& path) const override;
    std::string resolved(const std::string& path) const override;
    Outcome<void> write(const std::string& path, std::span<const std::byte> bytes) override;
    Outcome<void> make_directories(const std::string& path) override;
    Outcome<std::unique_ptr<OutputFile>> open_output(const std::string& path) override;
};

/// Largest plan and rig, and largest file that a plan may name.
inline constexpr std::size_t largest_config_bytes = (std::size_t{1} << 20) - 1;
inline constexpr std::size_t largest_named_file_bytes = std::size_t{16} << 20;

}  // namespace halflsb
