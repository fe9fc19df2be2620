// Writes what the board returned to the capture file, before anything looks at it, and reads it back
// for a second pass. The file is NPY 1.0 in the codes of the output format, shape (samples,) or
// (samples, channels). What was sent is kept in the same way, in the codes of the input format.
#pragma once

#include <cstddef>
#include <cstdint>
#include <memory>
#include <span>
#include <string>
#include <vector>

#include "runner/world/files.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

class Recorder {
public:
    /// Begins the file beside its final name (Files::open_output). Errors of all members are of kind
    /// output, place = the path; after one the recorder is only good for discarding.
    static Outcome<Recorder> open(Files& files, const std::string& path, const SampleFormat& format, int channels = 1);

    /// The next response samples, in order: instants, each with a code a channel. They are in the file when this
    /// returns.
    Outcome<void> append(std::span<const Code> codes);
    /// Instants.
    std::int64_t samples() const { return samples_; }
    /// Samples that were appended, from instant first_index on; they must all be there.
    Outcome<void> read(std::int64_t first_index, std::span<Code> codes);
    /// Another final name in the same folder, for the capture of an attempt that another one follows.
    void rename(const std::string& path) { file_->rename(path); }
    /// Writes the length into the header and gives the file its name.
    Outcome<void> finish();
    /// Leaves nothing behind.
    void discard();

private:
    Recorder(std::unique_ptr<OutputFile> file, const SampleFormat& format, int channels)
        : file_(std::move(file)), format_(format), channels_(channels) {}

    std::unique_ptr<OutputFile> file_;
    SampleFormat format_;
    int channels_;
    std::int64_t samples_ = 0;
    std::vector<std::byte> bytes_;
};

}  // namespace halflsb
