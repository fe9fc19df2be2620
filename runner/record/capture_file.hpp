// A capture (or a kept stimulus) of a run's folder, read in blocks: its length costs no memory.
#pragma once

#include <cstddef>
#include <cstdint>
#include <memory>
#include <span>
#include <string>
#include <vector>

#include "runner/world/files.hpp"
#include "stimuli/npy.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

class CaptureFile {
public:
    /// Opens an NPY whose elements are codes of `format`, `channels` of them an instant. Errors are of kind input, the
    /// place is `shown`: another type or number of channels, more or fewer bytes than the header states.
    static Outcome<CaptureFile> open(const Files& files, const std::string& path, const std::string& shown,
                                     const SampleFormat& format, int channels);

    /// Instants.
    std::int64_t samples() const { return samples_; }
    /// Codes of instants from first_index on, `channels` codes each; all of them must be there.
    Outcome<void> read(std::int64_t first_index, std::span<Code> codes);

private:
    CaptureFile(std::unique_ptr<InputFile> file, std::string shown, const SampleFormat& format, int channels)
        : file_(std::move(file)), shown_(std::move(shown)), format_(format), channels_(channels) {}

    std::unique_ptr<InputFile> file_;
    std::string shown_;
    SampleFormat format_;
    int channels_;
    std::int64_t samples_ = 0;
    std::size_t data_offset_ = 0;
    std::vector<std::byte> bytes_;
};

}  // namespace halflsb
